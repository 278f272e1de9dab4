-- The schema of a book as SQLite reports it, made by the migrations of migrations/sqlite. Not to be changed by hand.
-- README.md beside it explains it.

PRAGMA application_id = 1399022187;
PRAGMA user_version = 1;

CREATE TABLE act (
  number INTEGER PRIMARY KEY CHECK (number >= 1),
  time_ms INTEGER NOT NULL,
  who TEXT NOT NULL CHECK (who <> ''),
  station TEXT NOT NULL,
  reason TEXT NOT NULL,
  command TEXT NOT NULL,
  program TEXT NOT NULL,
  method INTEGER NOT NULL,
  tables TEXT NOT NULL,
  hash TEXT NOT NULL CHECK (length(hash) = 64)
) STRICT;

CREATE TRIGGER act_keeps_rows BEFORE UPDATE ON act BEGIN
  SELECT RAISE(ABORT, 'act: rows of a book are never changed; a correction is a new version');
END;

CREATE TRIGGER act_loses_no_row BEFORE DELETE ON act BEGIN
  SELECT RAISE(ABORT, 'act: rows of a book are never deleted');
END;

CREATE TRIGGER act_replaces_no_row BEFORE INSERT ON act WHEN EXISTS (SELECT 1 FROM act WHERE number = NEW.number) BEGIN
  SELECT RAISE(ABORT, 'act: a row with this key exists; rows of a book are never replaced');
END;

CREATE TABLE curve (
  station TEXT NOT NULL,
  number INTEGER NOT NULL CHECK (number >= 1),
  act INTEGER NOT NULL REFERENCES act (number) DEFERRABLE INITIALLY DEFERRED,
  form TEXT NOT NULL CHECK (form IN ('power', 'conveyance')),
  hold TEXT NOT NULL CHECK (hold IN ('velocity-scale', 'carried', 'flow-scale')),
  lineage INTEGER NOT NULL,
  parent INTEGER,
  survey TEXT NOT NULL,
  survey_version INTEGER NOT NULL,
  from_ms INTEGER NOT NULL,
  until_ms INTEGER,
  takeover_level_m REAL CHECK (abs(takeover_level_m) < 1e300),
  survey_level_error_m REAL NOT NULL CHECK (abs(survey_level_error_m) < 1e300),
  model_error REAL NOT NULL CHECK (abs(model_error) < 1e300),
  surveyed_top_m REAL NOT NULL CHECK (abs(surveyed_top_m) < 1e300),
  gauged_low_m3s REAL CHECK (abs(gauged_low_m3s) < 1e300),
  gauged_high_m3s REAL CHECK (abs(gauged_high_m3s) < 1e300),
  lineage_high_m3s REAL CHECK (abs(lineage_high_m3s) < 1e300),
  inferred INTEGER NOT NULL CHECK (inferred IN (0, 1)),
  carried INTEGER NOT NULL CHECK (carried IN (0, 1)),
  unknowns TEXT NOT NULL,
  covariance TEXT NOT NULL,
  remarks TEXT NOT NULL,
  PRIMARY KEY (station, number),
  FOREIGN KEY (station, lineage) REFERENCES curve (station, number) DEFERRABLE INITIALLY DEFERRED,
  FOREIGN KEY (station, parent) REFERENCES curve (station, number) DEFERRABLE INITIALLY DEFERRED,
  FOREIGN KEY (station, survey, survey_version) REFERENCES survey (station, id, version) DEFERRABLE INITIALLY DEFERRED
) STRICT, WITHOUT ROWID;

CREATE INDEX curve_of_act ON curve (act);

CREATE TRIGGER curve_keeps_rows BEFORE UPDATE ON curve BEGIN
  SELECT RAISE(ABORT, 'curve: rows of a book are never changed; a correction is a new version');
END;

CREATE TRIGGER curve_loses_no_row BEFORE DELETE ON curve BEGIN
  SELECT RAISE(ABORT, 'curve: rows of a book are never deleted');
END;

CREATE TRIGGER curve_replaces_no_row BEFORE INSERT ON curve WHEN EXISTS (SELECT 1 FROM curve WHERE station = NEW.station AND number = NEW.number) BEGIN
  SELECT RAISE(ABORT, 'curve: a row with this key exists; rows of a book are never replaced');
END;

CREATE TABLE curve_band (
  station TEXT NOT NULL,
  curve INTEGER NOT NULL,
  number INTEGER NOT NULL CHECK (number >= 1),
  act INTEGER NOT NULL REFERENCES act (number) DEFERRABLE INITIALLY DEFERRED,
  level_m REAL NOT NULL CHECK (abs(level_m) < 1e300),
  sd_ln_q REAL NOT NULL CHECK (abs(sd_ln_q) < 1e300),
  PRIMARY KEY (station, curve, number),
  FOREIGN KEY (station, curve) REFERENCES curve (station, number) DEFERRABLE INITIALLY DEFERRED
) STRICT, WITHOUT ROWID;

CREATE INDEX curve_band_of_act ON curve_band (act);

CREATE TRIGGER curve_band_keeps_rows BEFORE UPDATE ON curve_band BEGIN
  SELECT RAISE(ABORT, 'curve_band: rows of a book are never changed; a correction is a new version');
END;

CREATE TRIGGER curve_band_loses_no_row BEFORE DELETE ON curve_band BEGIN
  SELECT RAISE(ABORT, 'curve_band: rows of a book are never deleted');
END;

CREATE TRIGGER curve_band_replaces_no_row BEFORE INSERT ON curve_band WHEN EXISTS (SELECT 1 FROM curve_band WHERE station = NEW.station AND curve = NEW.curve AND number = NEW.number) BEGIN
  SELECT RAISE(ABORT, 'curve_band: a row with this key exists; rows of a book are never replaced');
END;

CREATE TABLE curve_control (
  station TEXT NOT NULL,
  curve INTEGER NOT NULL,
  number INTEGER NOT NULL CHECK (number >= 1),
  act INTEGER NOT NULL REFERENCES act (number) DEFERRABLE INITIALLY DEFERRED,
  kind TEXT NOT NULL CHECK (kind IN ('section', 'channel', 'overbank')),
  name TEXT NOT NULL,
  cross_section TEXT NOT NULL,
  part TEXT NOT NULL,
  flow_law TEXT NOT NULL CHECK (flow_law IN ('manning', 'chezy', 'critical')),
  velocity_scale REAL NOT NULL CHECK (abs(velocity_scale) < 1e300),
  velocity_exponent REAL NOT NULL CHECK (abs(velocity_exponent) < 1e300),
  allowance_h0_m REAL NOT NULL CHECK (abs(allowance_h0_m) < 1e300),
  allowance_c REAL NOT NULL CHECK (abs(allowance_c) < 1e300),
  reference_depth_m REAL NOT NULL CHECK (abs(reference_depth_m) < 1e300),
  calibrated_in INTEGER NOT NULL,
  survey TEXT NOT NULL,
  survey_version INTEGER NOT NULL,
  lowest_point_m REAL NOT NULL CHECK (abs(lowest_point_m) < 1e300),
  surveyed_h0_m REAL NOT NULL CHECK (abs(surveyed_h0_m) < 1e300),
  surveyed_c REAL NOT NULL CHECK (abs(surveyed_c) < 1e300),
  area_coefficient REAL NOT NULL CHECK (abs(area_coefficient) < 1e300),
  section_coefficient REAL NOT NULL CHECK (abs(section_coefficient) < 1e300),
  range_from_m REAL NOT NULL CHECK (abs(range_from_m) < 1e300),
  range_to_m REAL NOT NULL CHECK (abs(range_to_m) < 1e300),
  law_misfit REAL NOT NULL CHECK (abs(law_misfit) < 1e300),
  trim_h0_m REAL NOT NULL CHECK (abs(trim_h0_m) < 1e300),
  trim_c REAL NOT NULL CHECK (abs(trim_c) < 1e300),
  h0_m REAL NOT NULL CHECK (abs(h0_m) < 1e300),
  area_exponent REAL NOT NULL CHECK (abs(area_exponent) < 1e300),
  exponent REAL NOT NULL CHECK (abs(exponent) < 1e300),
  flow_scale REAL NOT NULL CHECK (abs(flow_scale) < 1e300),
  scale_fate TEXT NOT NULL CHECK (scale_fate IN ('held', 'recomputed', 'refitted', 'carried', 'rescaled', 'new')),
  allowance_fate TEXT NOT NULL CHECK (allowance_fate IN ('held', 'recomputed', 'refitted', 'carried', 'rescaled', 'new')),
  survey_fate TEXT NOT NULL CHECK (survey_fate IN ('held', 'recomputed', 'refitted', 'carried', 'rescaled', 'new')),
  trim_fate TEXT NOT NULL CHECK (trim_fate IN ('held', 'recomputed', 'refitted', 'carried', 'rescaled', 'new')),
  PRIMARY KEY (station, curve, number),
  FOREIGN KEY (station, curve) REFERENCES curve (station, number) DEFERRABLE INITIALLY DEFERRED,
  FOREIGN KEY (station, survey, survey_version) REFERENCES survey (station, id, version) DEFERRABLE INITIALLY DEFERRED
) STRICT, WITHOUT ROWID;

CREATE INDEX curve_control_of_act ON curve_control (act);

CREATE TRIGGER curve_control_keeps_rows BEFORE UPDATE ON curve_control BEGIN
  SELECT RAISE(ABORT, 'curve_control: rows of a book are never changed; a correction is a new version');
END;

CREATE TRIGGER curve_control_loses_no_row BEFORE DELETE ON curve_control BEGIN
  SELECT RAISE(ABORT, 'curve_control: rows of a book are never deleted');
END;

CREATE TRIGGER curve_control_replaces_no_row BEFORE INSERT ON curve_control WHEN EXISTS (SELECT 1 FROM curve_control WHERE station = NEW.station AND curve = NEW.curve AND number = NEW.number) BEGIN
  SELECT RAISE(ABORT, 'curve_control: a row with this key exists; rows of a book are never replaced');
END;

CREATE TABLE curve_diagnostic (
  station TEXT NOT NULL,
  curve INTEGER NOT NULL,
  number INTEGER NOT NULL CHECK (number >= 1),
  act INTEGER NOT NULL REFERENCES act (number) DEFERRABLE INITIALLY DEFERRED,
  name TEXT NOT NULL,
  value REAL CHECK (abs(value) < 1e300),
  value_limit REAL CHECK (abs(value_limit) < 1e300),
  verdict TEXT NOT NULL,
  text TEXT NOT NULL,
  rule TEXT NOT NULL,
  source TEXT NOT NULL,
  PRIMARY KEY (station, curve, number),
  FOREIGN KEY (station, curve) REFERENCES curve (station, number) DEFERRABLE INITIALLY DEFERRED
) STRICT, WITHOUT ROWID;

CREATE INDEX curve_diagnostic_of_act ON curve_diagnostic (act);

CREATE TRIGGER curve_diagnostic_keeps_rows BEFORE UPDATE ON curve_diagnostic BEGIN
  SELECT RAISE(ABORT, 'curve_diagnostic: rows of a book are never changed; a correction is a new version');
END;

CREATE TRIGGER curve_diagnostic_loses_no_row BEFORE DELETE ON curve_diagnostic BEGIN
  SELECT RAISE(ABORT, 'curve_diagnostic: rows of a book are never deleted');
END;

CREATE TRIGGER curve_diagnostic_replaces_no_row BEFORE INSERT ON curve_diagnostic WHEN EXISTS (SELECT 1 FROM curve_diagnostic WHERE station = NEW.station AND curve = NEW.curve AND number = NEW.number) BEGIN
  SELECT RAISE(ABORT, 'curve_diagnostic: a row with this key exists; rows of a book are never replaced');
END;

CREATE TABLE curve_gauging (
  station TEXT NOT NULL,
  curve INTEGER NOT NULL,
  number INTEGER NOT NULL CHECK (number >= 1),
  act INTEGER NOT NULL REFERENCES act (number) DEFERRABLE INITIALLY DEFERRED,
  gauging TEXT NOT NULL,
  version INTEGER NOT NULL,
  gauging_use TEXT NOT NULL CHECK (gauging_use IN ('used', 'left out', 'weighted down')),
  reason TEXT NOT NULL,
  role TEXT NOT NULL,
  level_m REAL NOT NULL CHECK (abs(level_m) < 1e300),
  discharge_m3s REAL NOT NULL CHECK (abs(discharge_m3s) < 1e300),
  curve_m3s REAL NOT NULL CHECK (abs(curve_m3s) < 1e300),
  residual REAL CHECK (abs(residual) < 1e300),
  sd_ln_q REAL NOT NULL CHECK (abs(sd_ln_q) < 1e300),
  PRIMARY KEY (station, curve, number),
  FOREIGN KEY (station, curve) REFERENCES curve (station, number) DEFERRABLE INITIALLY DEFERRED,
  FOREIGN KEY (station, gauging, version) REFERENCES gauging (station, id, version) DEFERRABLE INITIALLY DEFERRED
) STRICT, WITHOUT ROWID;

CREATE INDEX curve_gauging_of_act ON curve_gauging (act);

CREATE TRIGGER curve_gauging_keeps_rows BEFORE UPDATE ON curve_gauging BEGIN
  SELECT RAISE(ABORT, 'curve_gauging: rows of a book are never changed; a correction is a new version');
END;

CREATE TRIGGER curve_gauging_loses_no_row BEFORE DELETE ON curve_gauging BEGIN
  SELECT RAISE(ABORT, 'curve_gauging: rows of a book are never deleted');
END;

CREATE TRIGGER curve_gauging_replaces_no_row BEFORE INSERT ON curve_gauging WHEN EXISTS (SELECT 1 FROM curve_gauging WHERE station = NEW.station AND curve = NEW.curve AND number = NEW.number) BEGIN
  SELECT RAISE(ABORT, 'curve_gauging: a row with this key exists; rows of a book are never replaced');
END;

CREATE TABLE curve_reach (
  station TEXT NOT NULL,
  curve INTEGER NOT NULL,
  number INTEGER NOT NULL CHECK (number >= 1),
  act INTEGER NOT NULL REFERENCES act (number) DEFERRABLE INITIALLY DEFERRED,
  reach INTEGER NOT NULL,
  version INTEGER NOT NULL,
  PRIMARY KEY (station, curve, number),
  FOREIGN KEY (station, curve) REFERENCES curve (station, number) DEFERRABLE INITIALLY DEFERRED,
  FOREIGN KEY (reach, version) REFERENCES reach (row, version) DEFERRABLE INITIALLY DEFERRED
) STRICT, WITHOUT ROWID;

CREATE INDEX curve_reach_of_act ON curve_reach (act);

CREATE TRIGGER curve_reach_keeps_rows BEFORE UPDATE ON curve_reach BEGIN
  SELECT RAISE(ABORT, 'curve_reach: rows of a book are never changed; a correction is a new version');
END;

CREATE TRIGGER curve_reach_loses_no_row BEFORE DELETE ON curve_reach BEGIN
  SELECT RAISE(ABORT, 'curve_reach: rows of a book are never deleted');
END;

CREATE TRIGGER curve_reach_replaces_no_row BEFORE INSERT ON curve_reach WHEN EXISTS (SELECT 1 FROM curve_reach WHERE station = NEW.station AND curve = NEW.curve AND number = NEW.number) BEGIN
  SELECT RAISE(ABORT, 'curve_reach: a row with this key exists; rows of a book are never replaced');
END;

CREATE TABLE edition (
  station TEXT NOT NULL,
  number INTEGER NOT NULL CHECK (number >= 1),
  act INTEGER NOT NULL REFERENCES act (number) DEFERRABLE INITIALLY DEFERRED,
  parent INTEGER,
  PRIMARY KEY (station, number),
  FOREIGN KEY (station, parent) REFERENCES edition (station, number) DEFERRABLE INITIALLY DEFERRED
) STRICT, WITHOUT ROWID;

CREATE INDEX edition_of_act ON edition (act);

CREATE TRIGGER edition_keeps_rows BEFORE UPDATE ON edition BEGIN
  SELECT RAISE(ABORT, 'edition: rows of a book are never changed; a correction is a new version');
END;

CREATE TRIGGER edition_loses_no_row BEFORE DELETE ON edition BEGIN
  SELECT RAISE(ABORT, 'edition: rows of a book are never deleted');
END;

CREATE TRIGGER edition_replaces_no_row BEFORE INSERT ON edition WHEN EXISTS (SELECT 1 FROM edition WHERE station = NEW.station AND number = NEW.number) BEGIN
  SELECT RAISE(ABORT, 'edition: a row with this key exists; rows of a book are never replaced');
END;

CREATE TABLE file (
  id INTEGER PRIMARY KEY CHECK (id >= 1),
  act INTEGER NOT NULL REFERENCES act (number) DEFERRABLE INITIALLY DEFERRED,
  name TEXT NOT NULL,
  bytes INTEGER NOT NULL,
  sha256 TEXT NOT NULL CHECK (length(sha256) = 64),
  kind TEXT NOT NULL
) STRICT;

CREATE INDEX file_of_act ON file (act);

CREATE TRIGGER file_keeps_rows BEFORE UPDATE ON file BEGIN
  SELECT RAISE(ABORT, 'file: rows of a book are never changed; a correction is a new version');
END;

CREATE TRIGGER file_loses_no_row BEFORE DELETE ON file BEGIN
  SELECT RAISE(ABORT, 'file: rows of a book are never deleted');
END;

CREATE TRIGGER file_replaces_no_row BEFORE INSERT ON file WHEN EXISTS (SELECT 1 FROM file WHERE id = NEW.id) BEGIN
  SELECT RAISE(ABORT, 'file: a row with this key exists; rows of a book are never replaced');
END;

CREATE TABLE gauge_zero (
  station TEXT NOT NULL,
  valid_from_ms INTEGER NOT NULL,
  version INTEGER NOT NULL CHECK (version >= 1),
  act INTEGER NOT NULL REFERENCES act (number) DEFERRABLE INITIALLY DEFERRED,
  withdrawn INTEGER NOT NULL CHECK (withdrawn IN (0, 1)),
  file INTEGER NOT NULL REFERENCES file (id) DEFERRABLE INITIALLY DEFERRED,
  line INTEGER NOT NULL,
  zero_ticks INTEGER NOT NULL,
  remark TEXT NOT NULL,
  PRIMARY KEY (station, valid_from_ms, version)
) STRICT, WITHOUT ROWID;

CREATE INDEX gauge_zero_of_act ON gauge_zero (act);

CREATE TRIGGER gauge_zero_keeps_rows BEFORE UPDATE ON gauge_zero BEGIN
  SELECT RAISE(ABORT, 'gauge_zero: rows of a book are never changed; a correction is a new version');
END;

CREATE TRIGGER gauge_zero_loses_no_row BEFORE DELETE ON gauge_zero BEGIN
  SELECT RAISE(ABORT, 'gauge_zero: rows of a book are never deleted');
END;

CREATE TRIGGER gauge_zero_replaces_no_row BEFORE INSERT ON gauge_zero WHEN EXISTS (SELECT 1 FROM gauge_zero WHERE station = NEW.station AND valid_from_ms = NEW.valid_from_ms AND version = NEW.version) BEGIN
  SELECT RAISE(ABORT, 'gauge_zero: a row with this key exists; rows of a book are never replaced');
END;

CREATE TABLE gauging (
  station TEXT NOT NULL,
  id TEXT NOT NULL,
  version INTEGER NOT NULL CHECK (version >= 1),
  act INTEGER NOT NULL REFERENCES act (number) DEFERRABLE INITIALLY DEFERRED,
  withdrawn INTEGER NOT NULL CHECK (withdrawn IN (0, 1)),
  file INTEGER NOT NULL REFERENCES file (id) DEFERRABLE INITIALLY DEFERRED,
  line INTEGER NOT NULL,
  start_ms INTEGER NOT NULL,
  end_ms INTEGER,
  stage_ticks INTEGER NOT NULL,
  stage_end_ticks INTEGER,
  discharge_m3s REAL NOT NULL CHECK (discharge_m3s >= 0 AND discharge_m3s < 1e300),
  uncertainty_pct REAL CHECK (abs(uncertainty_pct) < 1e300),
  stage_uncertainty_m REAL CHECK (abs(stage_uncertainty_m) < 1e300),
  method TEXT NOT NULL,
  area_m2 REAL CHECK (abs(area_m2) < 1e300),
  width_m REAL CHECK (abs(width_m) < 1e300),
  velocity_ms REAL CHECK (abs(velocity_ms) < 1e300),
  quality TEXT NOT NULL CHECK (quality IN ('good', 'unchecked', 'estimate', 'suspect', 'poor', 'missing')),
  remark TEXT NOT NULL,
  PRIMARY KEY (station, id, version)
) STRICT, WITHOUT ROWID;

CREATE INDEX gauging_of_act ON gauging (act);

CREATE TRIGGER gauging_keeps_rows BEFORE UPDATE ON gauging BEGIN
  SELECT RAISE(ABORT, 'gauging: rows of a book are never changed; a correction is a new version');
END;

CREATE TRIGGER gauging_loses_no_row BEFORE DELETE ON gauging BEGIN
  SELECT RAISE(ABORT, 'gauging: rows of a book are never deleted');
END;

CREATE TRIGGER gauging_replaces_no_row BEFORE INSERT ON gauging WHEN EXISTS (SELECT 1 FROM gauging WHERE station = NEW.station AND id = NEW.id AND version = NEW.version) BEGIN
  SELECT RAISE(ABORT, 'gauging: a row with this key exists; rows of a book are never replaced');
END;

CREATE TABLE period (
  station TEXT NOT NULL,
  edition INTEGER NOT NULL,
  number INTEGER NOT NULL CHECK (number >= 1),
  act INTEGER NOT NULL REFERENCES act (number) DEFERRABLE INITIALLY DEFERRED,
  from_ms INTEGER NOT NULL,
  until_ms INTEGER CHECK (until_ms > from_ms),
  curve INTEGER,
  no_curve TEXT CHECK (no_curve IN ('closed', 'ice', 'backwater', 'works', 'other')),
  blend_ms INTEGER NOT NULL CHECK (blend_ms >= 0),
  PRIMARY KEY (station, edition, number),
  CHECK ((curve IS NULL) <> (no_curve IS NULL)),
  FOREIGN KEY (station, edition) REFERENCES edition (station, number) DEFERRABLE INITIALLY DEFERRED,
  FOREIGN KEY (station, curve) REFERENCES curve (station, number) DEFERRABLE INITIALLY DEFERRED
) STRICT, WITHOUT ROWID;

CREATE INDEX period_of_act ON period (act);

CREATE TRIGGER period_keeps_rows BEFORE UPDATE ON period BEGIN
  SELECT RAISE(ABORT, 'period: rows of a book are never changed; a correction is a new version');
END;

CREATE TRIGGER period_loses_no_row BEFORE DELETE ON period BEGIN
  SELECT RAISE(ABORT, 'period: rows of a book are never deleted');
END;

CREATE TRIGGER period_replaces_no_row BEFORE INSERT ON period WHEN EXISTS (SELECT 1 FROM period WHERE station = NEW.station AND edition = NEW.edition AND number = NEW.number) BEGIN
  SELECT RAISE(ABORT, 'period: a row with this key exists; rows of a book are never replaced');
END;

CREATE TABLE publication (
  station TEXT NOT NULL,
  number INTEGER NOT NULL CHECK (number >= 1),
  act INTEGER NOT NULL REFERENCES act (number) DEFERRABLE INITIALLY DEFERRED,
  replay INTEGER NOT NULL,
  from_ms INTEGER NOT NULL,
  until_ms INTEGER NOT NULL,
  decimals INTEGER NOT NULL CHECK (decimals BETWEEN 0 AND 9),
  title TEXT NOT NULL,
  note TEXT NOT NULL,
  sha256 TEXT NOT NULL CHECK (length(sha256) = 64),
  PRIMARY KEY (station, number),
  FOREIGN KEY (station, replay) REFERENCES replay (station, number) DEFERRABLE INITIALLY DEFERRED
) STRICT, WITHOUT ROWID;

CREATE INDEX publication_of_act ON publication (act);

CREATE TRIGGER publication_keeps_rows BEFORE UPDATE ON publication BEGIN
  SELECT RAISE(ABORT, 'publication: rows of a book are never changed; a correction is a new version');
END;

CREATE TRIGGER publication_loses_no_row BEFORE DELETE ON publication BEGIN
  SELECT RAISE(ABORT, 'publication: rows of a book are never deleted');
END;

CREATE TRIGGER publication_replaces_no_row BEFORE INSERT ON publication WHEN EXISTS (SELECT 1 FROM publication WHERE station = NEW.station AND number = NEW.number) BEGIN
  SELECT RAISE(ABORT, 'publication: a row with this key exists; rows of a book are never replaced');
END;

CREATE TABLE publication_day (
  station TEXT NOT NULL,
  publication INTEGER NOT NULL,
  day INTEGER NOT NULL,
  act INTEGER NOT NULL REFERENCES act (number) DEFERRABLE INITIALLY DEFERRED,
  mean INTEGER,
  u95_tenth_pct INTEGER,
  flags INTEGER NOT NULL,
  quality TEXT NOT NULL CHECK (quality IN ('good', 'unchecked', 'estimate', 'suspect', 'poor', 'missing')),
  share REAL NOT NULL CHECK (share BETWEEN 0 AND 1),
  curves TEXT NOT NULL,
  PRIMARY KEY (station, publication, day),
  FOREIGN KEY (station, publication) REFERENCES publication (station, number) DEFERRABLE INITIALLY DEFERRED
) STRICT, WITHOUT ROWID;

CREATE INDEX publication_day_of_act ON publication_day (act);

CREATE TRIGGER publication_day_keeps_rows BEFORE UPDATE ON publication_day BEGIN
  SELECT RAISE(ABORT, 'publication_day: rows of a book are never changed; a correction is a new version');
END;

CREATE TRIGGER publication_day_loses_no_row BEFORE DELETE ON publication_day BEGIN
  SELECT RAISE(ABORT, 'publication_day: rows of a book are never deleted');
END;

CREATE TRIGGER publication_day_replaces_no_row BEFORE INSERT ON publication_day WHEN EXISTS (SELECT 1 FROM publication_day WHERE station = NEW.station AND publication = NEW.publication AND day = NEW.day) BEGIN
  SELECT RAISE(ABORT, 'publication_day: a row with this key exists; rows of a book are never replaced');
END;

CREATE TABLE publication_month (
  station TEXT NOT NULL,
  publication INTEGER NOT NULL,
  month INTEGER NOT NULL,
  act INTEGER NOT NULL REFERENCES act (number) DEFERRABLE INITIALLY DEFERRED,
  count INTEGER NOT NULL CHECK (count >= 0),
  first_ms INTEGER NOT NULL,
  step_ms INTEGER NOT NULL CHECK (step_ms >= 0),
  flow_values TEXT NOT NULL,
  u95_tenth_pct TEXT NOT NULL,
  flag_runs TEXT NOT NULL,
  quality_runs TEXT NOT NULL,
  curve_runs TEXT NOT NULL,
  PRIMARY KEY (station, publication, month),
  FOREIGN KEY (station, publication) REFERENCES publication (station, number) DEFERRABLE INITIALLY DEFERRED
) STRICT, WITHOUT ROWID;

CREATE INDEX publication_month_of_act ON publication_month (act);

CREATE TRIGGER publication_month_keeps_rows BEFORE UPDATE ON publication_month BEGIN
  SELECT RAISE(ABORT, 'publication_month: rows of a book are never changed; a correction is a new version');
END;

CREATE TRIGGER publication_month_loses_no_row BEFORE DELETE ON publication_month BEGIN
  SELECT RAISE(ABORT, 'publication_month: rows of a book are never deleted');
END;

CREATE TRIGGER publication_month_replaces_no_row BEFORE INSERT ON publication_month WHEN EXISTS (SELECT 1 FROM publication_month WHERE station = NEW.station AND publication = NEW.publication AND month = NEW.month) BEGIN
  SELECT RAISE(ABORT, 'publication_month: a row with this key exists; rows of a book are never replaced');
END;

CREATE TABLE reach (
  row INTEGER NOT NULL,
  version INTEGER NOT NULL CHECK (version >= 1),
  act INTEGER NOT NULL REFERENCES act (number) DEFERRABLE INITIALLY DEFERRED,
  withdrawn INTEGER NOT NULL CHECK (withdrawn IN (0, 1)),
  file INTEGER NOT NULL REFERENCES file (id) DEFERRABLE INITIALLY DEFERRED,
  line INTEGER NOT NULL,
  station TEXT NOT NULL,
  valid_from_ms INTEGER NOT NULL,
  control TEXT NOT NULL CHECK (control IN ('section', 'channel', 'overbank')),
  cross_section TEXT NOT NULL,
  part TEXT NOT NULL,
  flow_law TEXT NOT NULL CHECK (flow_law IN ('manning', 'chezy', 'critical')),
  slope REAL CHECK (abs(slope) < 1e300),
  roughness_n REAL CHECK (abs(roughness_n) < 1e300),
  chezy_c REAL CHECK (abs(chezy_c) < 1e300),
  coefficient REAL CHECK (abs(coefficient) < 1e300),
  meander_factor REAL NOT NULL CHECK (abs(meander_factor) < 1e300),
  scale_sd_pct REAL CHECK (abs(scale_sd_pct) < 1e300),
  level_from_m REAL CHECK (abs(level_from_m) < 1e300),
  level_to_m REAL CHECK (abs(level_to_m) < 1e300),
  remark TEXT NOT NULL,
  PRIMARY KEY (row, version),
  UNIQUE (station, valid_from_ms, control, cross_section, part, version)
) STRICT, WITHOUT ROWID;

CREATE INDEX reach_of_act ON reach (act);

CREATE INDEX reach_of_station ON reach (station);

CREATE TRIGGER reach_keeps_rows BEFORE UPDATE ON reach BEGIN
  SELECT RAISE(ABORT, 'reach: rows of a book are never changed; a correction is a new version');
END;

CREATE TRIGGER reach_loses_no_row BEFORE DELETE ON reach BEGIN
  SELECT RAISE(ABORT, 'reach: rows of a book are never deleted');
END;

CREATE TRIGGER reach_replaces_no_row BEFORE INSERT ON reach WHEN EXISTS (SELECT 1 FROM reach WHERE row = NEW.row AND version = NEW.version) OR EXISTS (SELECT 1 FROM reach WHERE station = NEW.station AND valid_from_ms = NEW.valid_from_ms AND control = NEW.control AND cross_section = NEW.cross_section AND part = NEW.part AND version = NEW.version) BEGIN
  SELECT RAISE(ABORT, 'reach: a row with this key exists; rows of a book are never replaced');
END;

CREATE TABLE replay (
  station TEXT NOT NULL,
  number INTEGER NOT NULL CHECK (number >= 1),
  act INTEGER NOT NULL REFERENCES act (number) DEFERRABLE INITIALLY DEFERRED,
  edition INTEGER NOT NULL,
  data_version INTEGER NOT NULL,
  method INTEGER NOT NULL,
  from_ms INTEGER NOT NULL,
  until_ms INTEGER NOT NULL,
  PRIMARY KEY (station, number),
  FOREIGN KEY (station, edition) REFERENCES edition (station, number) DEFERRABLE INITIALLY DEFERRED
) STRICT, WITHOUT ROWID;

CREATE INDEX replay_of_act ON replay (act);

CREATE TRIGGER replay_keeps_rows BEFORE UPDATE ON replay BEGIN
  SELECT RAISE(ABORT, 'replay: rows of a book are never changed; a correction is a new version');
END;

CREATE TRIGGER replay_loses_no_row BEFORE DELETE ON replay BEGIN
  SELECT RAISE(ABORT, 'replay: rows of a book are never deleted');
END;

CREATE TRIGGER replay_replaces_no_row BEFORE INSERT ON replay WHEN EXISTS (SELECT 1 FROM replay WHERE station = NEW.station AND number = NEW.number) BEGIN
  SELECT RAISE(ABORT, 'replay: a row with this key exists; rows of a book are never replaced');
END;

CREATE TABLE replay_month (
  station TEXT NOT NULL,
  replay INTEGER NOT NULL,
  month INTEGER NOT NULL,
  act INTEGER NOT NULL REFERENCES act (number) DEFERRABLE INITIALLY DEFERRED,
  count INTEGER NOT NULL CHECK (count >= 0),
  sha256 TEXT NOT NULL CHECK (length(sha256) = 64),
  PRIMARY KEY (station, replay, month),
  FOREIGN KEY (station, replay) REFERENCES replay (station, number) DEFERRABLE INITIALLY DEFERRED
) STRICT, WITHOUT ROWID;

CREATE INDEX replay_month_of_act ON replay_month (act);

CREATE TRIGGER replay_month_keeps_rows BEFORE UPDATE ON replay_month BEGIN
  SELECT RAISE(ABORT, 'replay_month: rows of a book are never changed; a correction is a new version');
END;

CREATE TRIGGER replay_month_loses_no_row BEFORE DELETE ON replay_month BEGIN
  SELECT RAISE(ABORT, 'replay_month: rows of a book are never deleted');
END;

CREATE TRIGGER replay_month_replaces_no_row BEFORE INSERT ON replay_month WHEN EXISTS (SELECT 1 FROM replay_month WHERE station = NEW.station AND replay = NEW.replay AND month = NEW.month) BEGIN
  SELECT RAISE(ABORT, 'replay_month: a row with this key exists; rows of a book are never replaced');
END;

CREATE TABLE setting (
  name TEXT NOT NULL,
  act INTEGER NOT NULL REFERENCES act (number) DEFERRABLE INITIALLY DEFERRED,
  value REAL NOT NULL CHECK (abs(value) < 1e300),
  PRIMARY KEY (name, act)
) STRICT, WITHOUT ROWID;

CREATE INDEX setting_of_act ON setting (act);

CREATE TRIGGER setting_keeps_rows BEFORE UPDATE ON setting BEGIN
  SELECT RAISE(ABORT, 'setting: rows of a book are never changed; a correction is a new version');
END;

CREATE TRIGGER setting_loses_no_row BEFORE DELETE ON setting BEGIN
  SELECT RAISE(ABORT, 'setting: rows of a book are never deleted');
END;

CREATE TRIGGER setting_replaces_no_row BEFORE INSERT ON setting WHEN EXISTS (SELECT 1 FROM setting WHERE name = NEW.name AND act = NEW.act) BEGIN
  SELECT RAISE(ABORT, 'setting: a row with this key exists; rows of a book are never replaced');
END;

CREATE TABLE stage_correction (
  station TEXT NOT NULL,
  from_ms INTEGER NOT NULL,
  until_ms INTEGER NOT NULL,
  version INTEGER NOT NULL CHECK (version >= 1),
  act INTEGER NOT NULL REFERENCES act (number) DEFERRABLE INITIALLY DEFERRED,
  withdrawn INTEGER NOT NULL CHECK (withdrawn IN (0, 1)),
  file INTEGER NOT NULL REFERENCES file (id) DEFERRABLE INITIALLY DEFERRED,
  line INTEGER NOT NULL,
  add_at_from_ticks INTEGER NOT NULL,
  add_at_until_ticks INTEGER NOT NULL,
  remark TEXT NOT NULL,
  PRIMARY KEY (station, from_ms, until_ms, version)
) STRICT, WITHOUT ROWID;

CREATE INDEX stage_correction_of_act ON stage_correction (act);

CREATE TRIGGER stage_correction_keeps_rows BEFORE UPDATE ON stage_correction BEGIN
  SELECT RAISE(ABORT, 'stage_correction: rows of a book are never changed; a correction is a new version');
END;

CREATE TRIGGER stage_correction_loses_no_row BEFORE DELETE ON stage_correction BEGIN
  SELECT RAISE(ABORT, 'stage_correction: rows of a book are never deleted');
END;

CREATE TRIGGER stage_correction_replaces_no_row BEFORE INSERT ON stage_correction WHEN EXISTS (SELECT 1 FROM stage_correction WHERE station = NEW.station AND from_ms = NEW.from_ms AND until_ms = NEW.until_ms AND version = NEW.version) BEGIN
  SELECT RAISE(ABORT, 'stage_correction: a row with this key exists; rows of a book are never replaced');
END;

CREATE TABLE stage_piece (
  id INTEGER PRIMARY KEY CHECK (id >= 1),
  act INTEGER NOT NULL REFERENCES act (number) DEFERRABLE INITIALLY DEFERRED,
  station TEXT NOT NULL,
  month INTEGER NOT NULL,
  merged INTEGER NOT NULL CHECK (merged IN (0, 1)),
  file INTEGER NOT NULL REFERENCES file (id) DEFERRABLE INITIALLY DEFERRED,
  span_first_ms INTEGER NOT NULL,
  span_last_ms INTEGER NOT NULL CHECK (span_last_ms >= span_first_ms),
  first_ms INTEGER NOT NULL,
  step_ms INTEGER NOT NULL CHECK (step_ms >= 0),
  count INTEGER NOT NULL CHECK (count >= 0),
  unit TEXT NOT NULL CHECK (unit IN ('m', 'ft')),
  decimals INTEGER NOT NULL CHECK (decimals BETWEEN 0 AND 8),
  stage_values TEXT NOT NULL,
  quality_runs TEXT NOT NULL,
  line_runs TEXT NOT NULL,
  sha256 TEXT NOT NULL CHECK (length(sha256) = 64)
) STRICT;

CREATE INDEX stage_piece_of_act ON stage_piece (act);

CREATE INDEX stage_piece_of_month ON stage_piece (station, month, id, act, merged, count);

CREATE TRIGGER stage_piece_keeps_rows BEFORE UPDATE ON stage_piece BEGIN
  SELECT RAISE(ABORT, 'stage_piece: rows of a book are never changed; a correction is a new version');
END;

CREATE TRIGGER stage_piece_loses_no_row BEFORE DELETE ON stage_piece BEGIN
  SELECT RAISE(ABORT, 'stage_piece: rows of a book are never deleted');
END;

CREATE TRIGGER stage_piece_replaces_no_row BEFORE INSERT ON stage_piece WHEN EXISTS (SELECT 1 FROM stage_piece WHERE id = NEW.id) BEGIN
  SELECT RAISE(ABORT, 'stage_piece: a row with this key exists; rows of a book are never replaced');
END;

CREATE TABLE station (
  id TEXT NOT NULL,
  version INTEGER NOT NULL CHECK (version >= 1),
  act INTEGER NOT NULL REFERENCES act (number) DEFERRABLE INITIALLY DEFERRED,
  withdrawn INTEGER NOT NULL CHECK (withdrawn IN (0, 1)),
  file INTEGER NOT NULL REFERENCES file (id) DEFERRABLE INITIALLY DEFERRED,
  line INTEGER NOT NULL,
  name TEXT NOT NULL,
  river TEXT NOT NULL,
  utc_offset_minutes INTEGER NOT NULL,
  day_start_minutes INTEGER NOT NULL,
  water_year_month INTEGER NOT NULL CHECK (water_year_month BETWEEN 1 AND 12),
  latitude REAL CHECK (abs(latitude) <= 90),
  longitude REAL CHECK (abs(longitude) <= 360),
  remark TEXT NOT NULL,
  PRIMARY KEY (id, version)
) STRICT, WITHOUT ROWID;

CREATE INDEX station_of_act ON station (act);

CREATE TRIGGER station_keeps_rows BEFORE UPDATE ON station BEGIN
  SELECT RAISE(ABORT, 'station: rows of a book are never changed; a correction is a new version');
END;

CREATE TRIGGER station_loses_no_row BEFORE DELETE ON station BEGIN
  SELECT RAISE(ABORT, 'station: rows of a book are never deleted');
END;

CREATE TRIGGER station_replaces_no_row BEFORE INSERT ON station WHEN EXISTS (SELECT 1 FROM station WHERE id = NEW.id AND version = NEW.version) BEGIN
  SELECT RAISE(ABORT, 'station: a row with this key exists; rows of a book are never replaced');
END;

CREATE TABLE survey (
  station TEXT NOT NULL,
  id TEXT NOT NULL,
  version INTEGER NOT NULL CHECK (version >= 1),
  act INTEGER NOT NULL REFERENCES act (number) DEFERRABLE INITIALLY DEFERRED,
  withdrawn INTEGER NOT NULL CHECK (withdrawn IN (0, 1)),
  file INTEGER NOT NULL REFERENCES file (id) DEFERRABLE INITIALLY DEFERRED,
  line INTEGER NOT NULL,
  surveyed_at_ms INTEGER NOT NULL,
  level_uncertainty_m REAL CHECK (abs(level_uncertainty_m) < 1e300),
  remark TEXT NOT NULL,
  PRIMARY KEY (station, id, version)
) STRICT, WITHOUT ROWID;

CREATE INDEX survey_of_act ON survey (act);

CREATE TRIGGER survey_keeps_rows BEFORE UPDATE ON survey BEGIN
  SELECT RAISE(ABORT, 'survey: rows of a book are never changed; a correction is a new version');
END;

CREATE TRIGGER survey_loses_no_row BEFORE DELETE ON survey BEGIN
  SELECT RAISE(ABORT, 'survey: rows of a book are never deleted');
END;

CREATE TRIGGER survey_replaces_no_row BEFORE INSERT ON survey WHEN EXISTS (SELECT 1 FROM survey WHERE station = NEW.station AND id = NEW.id AND version = NEW.version) BEGIN
  SELECT RAISE(ABORT, 'survey: a row with this key exists; rows of a book are never replaced');
END;

CREATE TABLE survey_point (
  station TEXT NOT NULL,
  survey TEXT NOT NULL,
  version INTEGER NOT NULL,
  number INTEGER NOT NULL CHECK (number >= 1),
  act INTEGER NOT NULL REFERENCES act (number) DEFERRABLE INITIALLY DEFERRED,
  line INTEGER NOT NULL,
  cross_section TEXT NOT NULL,
  part TEXT NOT NULL,
  distance_m REAL NOT NULL CHECK (abs(distance_m) < 1e300),
  elevation_m REAL NOT NULL CHECK (abs(elevation_m) < 1e300),
  mark TEXT NOT NULL,
  PRIMARY KEY (station, survey, version, number),
  FOREIGN KEY (station, survey, version) REFERENCES survey (station, id, version) DEFERRABLE INITIALLY DEFERRED
) STRICT, WITHOUT ROWID;

CREATE INDEX survey_point_of_act ON survey_point (act);

CREATE TRIGGER survey_point_keeps_rows BEFORE UPDATE ON survey_point BEGIN
  SELECT RAISE(ABORT, 'survey_point: rows of a book are never changed; a correction is a new version');
END;

CREATE TRIGGER survey_point_loses_no_row BEFORE DELETE ON survey_point BEGIN
  SELECT RAISE(ABORT, 'survey_point: rows of a book are never deleted');
END;

CREATE TRIGGER survey_point_replaces_no_row BEFORE INSERT ON survey_point WHEN EXISTS (SELECT 1 FROM survey_point WHERE station = NEW.station AND survey = NEW.survey AND version = NEW.version AND number = NEW.number) BEGIN
  SELECT RAISE(ABORT, 'survey_point: a row with this key exists; rows of a book are never replaced');
END;

CREATE VIEW gauge_zero_now AS
SELECT z.station, strftime('%Y-%m-%dT%H:%M:%fZ', z.valid_from_ms / 1000.0, 'unixepoch') AS valid_from,
       z.zero_ticks / 1e8 AS gauge_zero_m, z.remark, z.version, z.act, z.file, z.line
FROM gauge_zero z
WHERE z.withdrawn = 0
  AND z.version = (SELECT max(o.version) FROM gauge_zero o
                   WHERE o.station = z.station AND o.valid_from_ms = z.valid_from_ms);

CREATE VIEW gauging_now AS
SELECT strftime('%Y-%m-%dT%H:%M:%fZ', g.start_ms / 1000.0, 'unixepoch') AS start, g.stage_ticks / 1e8 AS stage_m, g.*
FROM gauging g
WHERE g.withdrawn = 0
  AND g.version = (SELECT max(o.version) FROM gauging o WHERE o.station = g.station AND o.id = g.id);

CREATE VIEW period_now AS
SELECT p.station, p.edition, p.number, strftime('%Y-%m-%dT%H:%M:%fZ', p.from_ms / 1000.0, 'unixepoch') AS "from",
       strftime('%Y-%m-%dT%H:%M:%fZ', p.until_ms / 1000.0, 'unixepoch') AS until, p.curve, p.no_curve,
       p.blend_ms / 3600000.0 AS blend_hours, p.act
FROM period p
WHERE p.edition = (SELECT max(e.number) FROM edition e WHERE e.station = p.station);

CREATE VIEW publication_value AS
SELECT m.station, m.publication,
       strftime('%Y-%m-%dT%H:%M:%fZ', CASE m.step_ms WHEN 0 THEN m.first_ms + json_extract(v.value, '$[0]')
                ELSE m.first_ms + m.step_ms * v.key END / 1000.0, 'unixepoch') AS time,
       CASE m.step_ms WHEN 0 THEN json_extract(v.value, '$[1]') ELSE v.value END
         / CAST('1e' || p.decimals AS REAL) AS discharge_m3s,
       json_extract(m.u95_tenth_pct, '$[' || v.key || ']') / 10.0 AS u95_pct,
       (SELECT json_extract(q.value, '$[1]') FROM json_each(m.quality_runs) q
        WHERE json_extract(q.value, '$[0]') <= v.key ORDER BY q.key DESC LIMIT 1) AS quality,
       (SELECT json_extract(f.value, '$[1]') FROM json_each(m.flag_runs) f
        WHERE json_extract(f.value, '$[0]') <= v.key ORDER BY f.key DESC LIMIT 1) AS flags,
       (SELECT json_extract(c.value, '$[1]') FROM json_each(m.curve_runs) c
        WHERE json_extract(c.value, '$[0]') <= v.key ORDER BY c.key DESC LIMIT 1) AS curve
FROM publication_month m JOIN publication p ON p.station = m.station AND p.number = m.publication,
     json_each(m.flow_values) v;

CREATE VIEW published_day AS
SELECT d.station, date(d.day * 86400, 'unixepoch') AS day, d.mean / CAST('1e' || p.decimals AS REAL) AS discharge_m3s,
       d.u95_tenth_pct / 10.0 AS u95_pct, d.quality, d.flags, d.share, d.curves, d.publication
FROM publication_day d JOIN publication p ON p.station = d.station AND p.number = d.publication
WHERE d.publication = (SELECT max(o.publication) FROM publication_day o WHERE o.station = d.station AND o.day = d.day);

CREATE VIEW reach_now AS
SELECT strftime('%Y-%m-%dT%H:%M:%fZ', r.valid_from_ms / 1000.0, 'unixepoch') AS valid_from, r.*
FROM reach r
WHERE r.withdrawn = 0 AND r.version = (SELECT max(o.version) FROM reach o WHERE o.row = r.row);

CREATE VIEW stage AS
SELECT r.station, strftime('%Y-%m-%dT%H:%M:%fZ', r.time_ms / 1000.0, 'unixepoch') AS time, r.time_ms,
       CASE r.unit WHEN 'ft' THEN 0.3048 ELSE 1.0 END * r.stage_value / CAST('1e' || r.decimals AS REAL) AS stage_m,
       r.quality, r.file, r.line, r.piece, r.act
FROM stage_recorded r
WHERE NOT EXISTS (SELECT 1 FROM stage_piece p WHERE p.station = r.station AND p.month = r.month AND p.id > r.piece
                  AND r.time_ms BETWEEN p.span_first_ms AND p.span_last_ms);

CREATE VIEW stage_correction_now AS
SELECT c.station, strftime('%Y-%m-%dT%H:%M:%fZ', c.from_ms / 1000.0, 'unixepoch') AS "from",
       strftime('%Y-%m-%dT%H:%M:%fZ', c.until_ms / 1000.0, 'unixepoch') AS until,
       c.add_at_from_ticks / 1e8 AS add_at_from_m, c.add_at_until_ticks / 1e8 AS add_at_until_m, c.remark,
       c.version, c.act, c.file, c.line
FROM stage_correction c
WHERE c.withdrawn = 0
  AND c.version = (SELECT max(o.version) FROM stage_correction o
                   WHERE o.station = c.station AND o.from_ms = c.from_ms AND o.until_ms = c.until_ms);

CREATE VIEW stage_recorded AS
SELECT p.station, p.month, p.id AS piece, p.act, p.unit, p.decimals,
       CASE p.step_ms WHEN 0 THEN p.first_ms + json_extract(v.value, '$[0]') ELSE p.first_ms + p.step_ms * v.key END AS time_ms,
       CASE p.step_ms WHEN 0 THEN json_extract(v.value, '$[1]') ELSE v.value END AS stage_value,
       (SELECT json_extract(q.value, '$[1]') FROM json_each(p.quality_runs) q
        WHERE json_extract(q.value, '$[0]') <= v.key ORDER BY q.key DESC LIMIT 1) AS quality,
       (SELECT json_extract(l.value, '$[1]') FROM json_each(p.line_runs) l
        WHERE json_extract(l.value, '$[0]') <= v.key ORDER BY l.key DESC LIMIT 1) AS file,
       (SELECT json_extract(l.value, '$[2]') + v.key - json_extract(l.value, '$[0]') FROM json_each(p.line_runs) l
        WHERE json_extract(l.value, '$[0]') <= v.key ORDER BY l.key DESC LIMIT 1) AS line
FROM stage_piece p, json_each(p.stage_values) v;

CREATE VIEW station_now AS
SELECT s.* FROM station s
WHERE s.withdrawn = 0 AND s.version = (SELECT max(o.version) FROM station o WHERE o.id = s.id);

CREATE VIEW survey_now AS
SELECT strftime('%Y-%m-%dT%H:%M:%fZ', s.surveyed_at_ms / 1000.0, 'unixepoch') AS surveyed_at, s.*
FROM survey s
WHERE s.withdrawn = 0
  AND s.version = (SELECT max(o.version) FROM survey o WHERE o.station = s.station AND o.id = s.id);

CREATE VIEW survey_point_now AS
SELECT p.* FROM survey_point p JOIN survey_now s
  ON s.station = p.station AND s.id = p.survey AND s.version = p.version;
