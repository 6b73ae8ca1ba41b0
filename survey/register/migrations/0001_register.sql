-- The register of visits. This file is the one place where its tables are described; SQLite and PostgreSQL run the same text.
--
-- Rows are only ever added. A correction is a new row that names the one it supersedes. Every key is made from what the row holds, so a
-- row that was altered no longer fits its key. Text is never NULL ('' = not given); numbers are NULL when they were not worked out or
-- not recorded. u_ columns are standard uncertainties in the unit of the column they belong to. Dates are 2026-06-11 or
-- 2026-06-11T10:30; moments are UTC, RFC 3339.

-- +goose Up

-- Files as they were received: point surveys and cables files. The key is the SHA-256 of the bytes, hexadecimal.
CREATE TABLE files (
    sha256 TEXT PRIMARY KEY,
    kind   TEXT   NOT NULL CHECK (kind IN ('survey', 'cables')),
    name   TEXT   NOT NULL, -- of the file when it was first received, without its folder
    size   BIGINT NOT NULL, -- bytes
    bytes  BYTEA  NOT NULL
);

CREATE TABLE structures (
    structure TEXT PRIMARY KEY
);

CREATE TABLE spans (
    structure TEXT NOT NULL REFERENCES structures,
    cable     TEXT NOT NULL,
    span      TEXT NOT NULL,
    PRIMARY KEY (structure, cable, span)
);

-- Design values of one cable span as one cables file gives them. A changed cables file is another version beside the old one.
CREATE TABLE designs (
    cables_sha256 TEXT NOT NULL REFERENCES files, -- the version
    structure     TEXT NOT NULL,                  -- '' when the cables file names no structures
    cable         TEXT NOT NULL,
    span          TEXT NOT NULL,
    load_kind     TEXT NOT NULL,                  -- self weight, deck or both
    self_weight_N_per_m       DOUBLE PRECISION, u_self_weight_N_per_m       DOUBLE PRECISION,
    deck_load_N_per_m         DOUBLE PRECISION, u_deck_load_N_per_m         DOUBLE PRECISION,
    design_span_m             DOUBLE PRECISION, u_design_span_m             DOUBLE PRECISION,
    design_rise_m             DOUBLE PRECISION, u_design_rise_m             DOUBLE PRECISION,
    design_tension_N          DOUBLE PRECISION, u_design_tension_N          DOUBLE PRECISION,
    design_sag_m              DOUBLE PRECISION, u_design_sag_m              DOUBLE PRECISION,
    design_temperature_degC   DOUBLE PRECISION, u_design_temperature_degC   DOUBLE PRECISION,
    axial_stiffness_N         DOUBLE PRECISION, u_axial_stiffness_N         DOUBLE PRECISION,
    expansion_per_degC        DOUBLE PRECISION, u_expansion_per_degC        DOUBLE PRECISION,
    breaking_load_N           DOUBLE PRECISION, u_breaking_load_N           DOUBLE PRECISION,
    safety_factor             DOUBLE PRECISION,
    slack_below               DOUBLE PRECISION, -- fraction of the expected tension, 0.10 for 10 %
    overload_above            DOUBLE PRECISION,
    diameter_m                DOUBLE PRECISION, u_diameter_m                DOUBLE PRECISION,
    bending_stiffness_N_m2    DOUBLE PRECISION, u_bending_stiffness_N_m2    DOUBLE PRECISION,
    take_up_per_turn_m        DOUBLE PRECISION, u_take_up_per_turn_m        DOUBLE PRECISION,
    over_A        TEXT NOT NULL, -- how the cable passes over the support at A, if it goes on there
    over_B        TEXT NOT NULL,
    PRIMARY KEY (cables_sha256, structure, cable, span)
);

-- One survey file of one structure with its conditions. visit is made from the files, the settings, what it supersedes and why.
CREATE TABLE visits (
    visit         TEXT PRIMARY KEY,
    structure     TEXT NOT NULL REFERENCES structures,
    visit_date    TEXT NOT NULL,
    survey_sha256 TEXT NOT NULL REFERENCES files,
    survey_name   TEXT NOT NULL,
    cables_sha256 TEXT NOT NULL, -- the design version it was judged by when it was recorded, '' for none
    settings      TEXT NOT NULL, -- flags that were given beside the file, a JSON list of --flag=value
    temperature_degC       DOUBLE PRECISION, u_temperature_degC DOUBLE PRECISION, -- of the cable
    wind          TEXT NOT NULL,
    loads         TEXT NOT NULL, -- as filed, listed or not checked
    instrument    TEXT NOT NULL,
    accuracy_horizontal_m  DOUBLE PRECISION,     -- one standard deviation of a point
    accuracy_vertical_m    DOUBLE PRECISION,
    crew          TEXT NOT NULL,
    supersedes    TEXT NOT NULL, -- the visit that this one corrects, '' for none
    why           TEXT NOT NULL, -- reason of the correction
    recorded_at   TEXT NOT NULL,
    recorded_by   TEXT NOT NULL  -- version of the program
);
-- Queries say supersedes <> '' beside the id that they look for: else SQLite does not use an index of these rows alone.
CREATE UNIQUE INDEX visits_superseded ON visits (supersedes) WHERE supersedes <> '';
CREATE INDEX visits_by_structure ON visits (structure, visit_date);
CREATE INDEX visits_by_survey ON visits (survey_sha256);

-- Tensions that were read directly on the day.
CREATE TABLE readings (
    visit     TEXT   NOT NULL REFERENCES visits,
    place     BIGINT NOT NULL, -- order in the survey, from 1
    cable     TEXT   NOT NULL, -- '' for the only cable
    span      TEXT   NOT NULL,
    read_of   TEXT   NOT NULL, -- horizontal tension, tension at A or tension at B
    tension_N DOUBLE PRECISION NOT NULL, u_tension_N DOUBLE PRECISION NOT NULL,
    how       TEXT   NOT NULL,
    PRIMARY KEY (visit, place)
);

-- Figures of one cable span of one visit, judged by one design version.
CREATE TABLE results (
    visit     TEXT NOT NULL REFERENCES visits,
    judged_by TEXT NOT NULL, -- SHA-256 of the cables file, '' for none
    cable     TEXT NOT NULL,
    span      TEXT NOT NULL,
    verdict   TEXT NOT NULL,
    reason    TEXT NOT NULL,
    next_step TEXT NOT NULL,
    shape     TEXT NOT NULL,
    points_used        BIGINT NOT NULL,
    points_rejected    BIGINT NOT NULL,
    degrees_of_freedom BIGINT NOT NULL,
    rms_m           DOUBLE PRECISION,
    variance_factor DOUBLE PRECISION,
    chord_m         DOUBLE PRECISION, u_chord_m        DOUBLE PRECISION,
    rise_m          DOUBLE PRECISION, u_rise_m         DOUBLE PRECISION,
    sag_mid_m       DOUBLE PRECISION, u_sag_mid_m      DOUBLE PRECISION,
    greatest_sag_m  DOUBLE PRECISION, u_greatest_sag_m DOUBLE PRECISION,
    arc_length_m    DOUBLE PRECISION, u_arc_length_m   DOUBLE PRECISION,
    hanging_load_N_per_m  DOUBLE PRECISION, u_hanging_load_N_per_m DOUBLE PRECISION,
    horizontal_tension_N  DOUBLE PRECISION, u_horizontal_tension_N DOUBLE PRECISION, -- on the day, if the load is as recorded
    horizontal_tension_at_least_N DOUBLE PRECISION,
    reference_tension_N   DOUBLE PRECISION, u_reference_tension_N  DOUBLE PRECISION, -- H at the reference temperature
    reference_temperature_degC    DOUBLE PRECISION,
    unstressed_length_m   DOUBLE PRECISION, u_unstressed_length_m  DOUBLE PRECISION,
    expected_tension_N    DOUBLE PRECISION, u_expected_tension_N   DOUBLE PRECISION,
    ratio                 DOUBLE PRECISION, u_ratio                DOUBLE PRECISION,
    p_slack               DOUBLE PRECISION,
    p_overload            DOUBLE PRECISION,
    greatest_tension_N    DOUBLE PRECISION, u_greatest_tension_N   DOUBLE PRECISION,
    strength_use          DOUBLE PRECISION, u_strength_use         DOUBLE PRECISION,
    start_easting_m  DOUBLE PRECISION, -- of station 0, in the frame of the survey
    start_northing_m DOUBLE PRECISION,
    azimuth_deg      DOUBLE PRECISION, -- of the span, clockwise from north
    from_station_m   DOUBLE PRECISION,
    to_station_m     DOUBLE PRECISION,
    from_elevation_m DOUBLE PRECISION, -- of the fitted curve
    to_elevation_m   DOUBLE PRECISION,
    judged_at   TEXT NOT NULL,
    judged_with TEXT NOT NULL, -- version of the program
    PRIMARY KEY (visit, judged_by, cable, span)
);

-- What was done to a cable or happened to it. event is made from all other columns.
CREATE TABLE events (
    event      TEXT PRIMARY KEY,
    structure  TEXT NOT NULL REFERENCES structures,
    cable      TEXT NOT NULL, -- '' for every cable of the structure
    span       TEXT NOT NULL, -- '' for every span of the cable
    event_date TEXT NOT NULL,
    kind       TEXT NOT NULL,
    size       DOUBLE PRECISION, u_size DOUBLE PRECISION,
    unit       TEXT NOT NULL,
    note       TEXT NOT NULL,
    supersedes TEXT NOT NULL, -- the event that this one corrects, '' for none
    recorded_at TEXT NOT NULL
);
CREATE UNIQUE INDEX events_superseded ON events (supersedes) WHERE supersedes <> '';
CREATE INDEX events_by_structure ON events (structure, event_date);

-- For other programs: the figures that count today, one line a cable span and visit.
CREATE VIEW current_results AS
SELECT v.structure, v.visit_date, v.survey_sha256, v.survey_name, v.loads, v.temperature_degC, v.u_temperature_degC, r.*
FROM visits v JOIN results r ON r.visit = v.visit AND r.judged_by = v.cables_sha256
WHERE NOT EXISTS (SELECT 1 FROM visits w WHERE w.supersedes = v.visit AND w.supersedes <> '');

-- +goose Down
DROP VIEW current_results;
DROP TABLE events;
DROP TABLE results;
DROP TABLE readings;
DROP TABLE visits;
DROP TABLE designs;
DROP TABLE spans;
DROP TABLE structures;
DROP TABLE files;
