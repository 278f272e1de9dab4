#include "store/full_book.hpp"

namespace full_book {

Station station(const std::string& id) {
  Station made;
  made.id = id;
  made.name = "Tarn at Old Mill";
  made.river = "Tarn";
  made.clock.offset.minutes = std::chrono::minutes(60);
  made.clock.day_start = std::chrono::minutes(480);
  made.clock.water_year_month = 11;
  made.latitude = 44.1 + 0.2;
  made.longitude = -1.0 / 3;
  made.remark = "left bank, \"old\" staff; größer, 水位";
  return made;
}

Survey survey(const std::string& id, const std::string& time) {
  Survey made;
  made.station = kStation;
  made.id = id;
  made.surveyed_at = at(time);
  made.level_uncertainty_m = 0.01;
  made.points = {
      {"CS1", "main", 0, 105.25, "peg"}, {"CS1", "main", 0.1 + 0.2, 100, ""}, {"CS1", "left", 20, 105, ""}};
  made.remark = "wading";
  return made;
}

Gauging gauging(const std::string& id, const std::string& start, double stage_m, double m3s) {
  Gauging made;
  made.station = kStation;
  made.id = id;
  made.start = at(start);
  made.end = made.start + Millis(3'600'000);
  made.stage = Stage::from_metres(stage_m);
  made.stage_end = Stage::from_metres(stage_m + 0.01);
  made.discharge = Discharge::from_m3s(m3s);
  made.uncertainty_pct = 5.5;
  made.stage_uncertainty_m = 0.003;
  made.method = "current meter";
  made.area_m2 = 12.3;
  made.width_m = 9.9;
  made.velocity_ms = 0.77;
  made.quality = Quality::good;
  made.remark = "ice at the edges";
  return made;
}

ReachRow reach(ControlKind kind, const std::string& from) {
  ReachRow made;
  made.station = kStation;
  made.valid_from = at(from);
  made.control = kind;
  made.cross_section = "CS1";
  made.part = kind == ControlKind::overbank ? "left" : "main";
  made.law = kind == ControlKind::section ? FlowLaw::critical : FlowLaw::manning;
  if (kind == ControlKind::section) {
    made.coefficient = 0.9;
  } else {
    made.slope = 0.001;
    made.roughness_n = 0.031;
  }
  made.meander_factor = 1.15;
  made.scale_sd_pct = 20;
  made.level_from_m = 100.1;
  made.level_to_m = 103.3;
  made.remark = "gravel";
  return made;
}

namespace {

ControlCoefficients control(ControlKind kind, int salt) {
  ControlCoefficients c;
  c.kind = kind;
  c.name = std::string(word(kind));
  c.cross_section = "CS1";
  c.part = kind == ControlKind::overbank ? "left" : "main";
  c.law = kind == ControlKind::section ? FlowLaw::critical : FlowLaw::manning;
  double next = 1.0 / (3 + salt);
  for (double* figure :
       {&c.velocity_scale, &c.velocity_exponent, &c.allowance_h0_m, &c.allowance_c, &c.reference_depth_m,
        &c.lowest_point_m, &c.surveyed_h0_m, &c.surveyed_c, &c.area_coefficient, &c.section_coefficient,
        &c.range_from_m, &c.range_to_m, &c.law_misfit, &c.trim_h0_m, &c.trim_c, &c.h0_m, &c.area_exponent,
        &c.exponent, &c.flow_scale}) {
    *figure = next;
    next = next * 1.1 + 0.1;
  }
  c.calibrated_in = salt;
  c.survey = "S1";
  c.survey_version = 1;
  c.scale_fate = Fate::held;
  c.allowance_fate = Fate::rescaled;
  c.survey_fate = Fate::carried;
  c.trim_fate = Fate::fresh;
  return c;
}

}  // namespace

RatingCurve curve(const std::vector<PinnedReach>& reach) {
  RatingCurve made;
  made.station = kStation;
  made.form = CurveForm::conveyance;
  made.hold = HoldPolicy::flow_scale;
  made.survey = "S1";
  made.survey_version = 1;
  made.reach = reach;
  made.from = at("2019-02-01T00:00Z");
  made.until = at("2020-02-01T00:00:00.001Z");
  made.controls = {control(ControlKind::section, 0), control(ControlKind::channel, 1),
                   control(ControlKind::overbank, 2)};
  made.takeover_level_m = 101.1;
  made.survey_level_error_m = -1e-9 / 3;
  made.model_error = 0.03;
  made.unknowns = {"e_s", "section.dh", "channel.ec"};
  made.covariance = {1e-5 / 3, 5e-324, -1e-9, 5e-324, 0.1 + 0.2, 0, -1e-9, 0, 1.7976931348623157e+299};
  made.bands = {{100.2, 0.31}, {101.7, 0.06 / 7}, {103.9, 2e-16}};
  made.gaugings = {{"G1", 1, GaugingUse::used, "", "discharge", 101.3, 4.1, 4.0 / 3, 0.1 / 3, 0.05},
                   {"G2", 1, GaugingUse::left_out, "far off", "zero flow", 100.1, 0, 0, {}, 0.5}};
  made.diagnostics = {{"spread_pct", 3.3, 5.0, "passed", "the spread is small", "under 5 %", "own rule"},
                      {"trend", {}, {}, "not possible", "", "", ""}};
  made.remarks = {"the bed lies above the crest", "narrow slot"};
  made.surveyed_top_m = 105.25;
  made.gauged_low_m3s = 0.1;
  made.gauged_high_m3s = 44.4;
  made.lineage_high_m3s = 51;
  made.inferred = true;
  made.carried = true;
  return made;
}

store::Publication publication(int replay) {
  store::Publication made;
  made.station = kStation;
  made.replay = replay;
  made.from = at("2020-01-31T07:00Z");
  made.until = at("2020-02-02T07:00Z");
  made.decimals = 3;
  made.title = "winter 2020";
  made.note = "after the flood";
  store::PublishedMonth january;
  january.month = utc_month_of(at("2020-01-31T07:00Z"));
  for (int i = 0; i < 6; ++i) {
    january.time_ms.push_back(to_ms(made.from) + i * 3'600'000);
    january.value.push_back(i == 3 ? std::nullopt : std::optional<std::int64_t>(1000 + i));
    january.u95_tenth_pct.push_back(i == 3 ? 0 : 100 + i);
    january.flags.push_back(i < 2 ? bit(Flag::below_gauged) : Flags(bit(Flag::gap) | bit(Flag::shifted)));
    january.quality.push_back(i < 3 ? Quality::good : Quality::missing);
    january.curve.push_back(i < 4 ? 1 : 0);
  }
  store::PublishedMonth february = january;  // the last reading is 1 ms late: not equally spaced
  february.month = UtcMonth{january.month.number + 1};
  for (auto& time : february.time_ms) time += 86'400'000;
  february.time_ms.back() += 1;
  made.months = {january, february};
  made.days = {{18292, 1234, 105, bit(Flag::inferred), Quality::estimate, 1.0 / 3, {1, 2}},
               {18293, {}, {}, bit(Flag::gap), Quality::missing, 0, {}}};
  return made;
}

store::StageSeries series(const std::string& from, int count, std::int64_t first_mm, int step_minutes,
                          std::int64_t first_line) {
  store::StageSeries made{kStation, store::StageUnit::metre, 3, {}};
  for (int i = 0; i < count; ++i) {
    made.readings.push_back(
        {at(from) + Millis(60'000LL * step_minutes * i), first_mm + i, Quality::unchecked, first_line + i});
  }
  return made;
}

std::int64_t add_ground(store::Book& book) {
  auto writer = book.begin(head("ground"));
  const auto file = writer.add_file("ground.csv", 321, store::sha256_hex("ground"), "station");
  writer.add(station(), {file, 2});
  writer.add(GaugeZeroRow{kStation, at("2019-01-01T00:00Z"), GaugeZero::from_metres(99.123), "levelled"},
             {file, 3});
  for (const auto kind : {ControlKind::section, ControlKind::channel, ControlKind::overbank}) {
    writer.add(reach(kind), {file, 4});
  }
  writer.add(survey("S1", "2019-01-15T10:00Z"), {file, 5}, {5, 6, 7});
  writer.add(gauging("G1", "2019-03-01T10:00Z", 2.2, 4.1), {file, 8});
  writer.add(gauging("G2", "2019-04-01T10:00Z", 1.0, 0), {file, 9});
  writer.add(
      StageCorrection{kStation, at("2020-01-30T00:00Z"), at("2020-01-31T00:00Z"),
                      HeightChange::from_metres(0.01), HeightChange::from_metres(-0.02), "float stuck"},
      {file, 10});
  return writer.commit().number;
}

std::int64_t take(store::Book& book, const store::StageSeries& series, bool correct) {
  auto writer = book.begin(head("stage"));
  const auto file = writer.add_file("stage.csv", 1234, store::sha256_hex("stage"), "stage");
  (void)writer.add_stage(series, file, correct);
  return writer.commit().number;
}

std::int64_t add_stage(store::Book& book) {
  store::StageSeries made = series("2020-01-30T12:00Z", 72, 2000);
  made.readings[5].quality = Quality::poor;
  made.readings[6].value = store::kMissing;
  made.readings[6].quality = Quality::missing;
  for (const std::int64_t minutes : {0, 7, 31, 32}) {
    made.readings.push_back({at("2020-02-03T00:00:00.250Z") + Millis(60'000 * minutes), 2100 + minutes,
                             Quality::good, 100 + minutes});
  }
  return take(book, made);
}

std::int64_t add_curves(store::Book& book) {
  std::vector<PinnedReach> pinned;
  for (const auto& row : book.reach_rows(kStation)) pinned.push_back({row.row, row.stored.version});
  auto writer = book.begin(head("curves"));
  const RatingCurve first = writer.add_curve(curve(pinned));
  RatingCurve second = curve(pinned);
  second.parent = first.number;
  second.until.reset();
  second.takeover_level_m.reset();
  second.gauged_low_m3s.reset();
  (void)writer.add_curve(second);
  return writer.commit().number;
}

std::int64_t add_edition(store::Book& book) {
  Edition made;
  made.station = kStation;
  made.periods = {{at("2019-02-01T00:00Z"), at("2020-01-31T00:00Z"), 1, NoCurve::other, Millis(0)},
                  {at("2020-01-31T00:00Z"), at("2020-02-01T00:00Z"), {}, NoCurve::ice, Millis(0)},
                  {at("2020-02-01T00:00Z"), {}, 2, NoCurve::other, Millis(86'400'000)}};
  auto writer = book.begin(head("edition"));
  (void)writer.add_edition(made);
  return writer.commit().number;
}

std::int64_t add_publication(store::Book& book) {
  auto writer = book.begin(head("publication"));
  store::ReplayRecord replay;
  replay.station = kStation;
  replay.edition = 1;
  replay.data_version = book.data_version(kStation);
  replay.from = at("2020-01-31T07:00Z");
  replay.until = at("2020-02-02T07:00Z");
  replay.months = {{utc_month_of(replay.from), 24, store::sha256_hex("flows")}};
  replay = writer.add_replay(replay);
  (void)writer.add_publication(publication(replay.number));
  return writer.commit().number;
}

void fill(store::Book& book) {
  add_ground(book);
  add_stage(book);
  add_curves(book);
  add_edition(book);
  add_publication(book);
}

}  // namespace full_book
