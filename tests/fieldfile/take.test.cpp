// Takes into a real book: all files or none, in one act; what repeats, what contradicts, what is corrected.
#include "fieldfile/take.hpp"

#include "fieldfile_texts.hpp"
#include "folder.hpp"

using namespace scourbook;
using namespace scourbook::fieldfile;

namespace {

const std::string kStations = "station,name,utc_offset\nTAR-1,Millmark,+01:00\nTAR-2,Lowbridge,Z\n";
const std::string kGaugings =
    "station,gauging,start,stage_m,discharge_m3s\n"
    "TAR-1,G1,2010-01-01T10:00,1.25,12.5\n"
    "TAR-1,G2,2010-02-01T10:00,1.75,25\n";
const std::string kStage =
    "station,time,stage_m\n"
    "TAR-1,2010-01-01T00:00,1.25\n"
    "TAR-1,2010-01-01T00:15,1.26\n"
    "TAR-1,2010-01-01T00:30,\n";

/// A new book in a folder, and takes into it.
class Desk {
 public:
  Desk() : book_(store::Book::create(folder_.path("t.scourbook"), {"officer A", "", "", "new"})) {}

  Taken take(const std::vector<std::string>& paths, bool correct = false) {
    TakeOptions options;
    options.who = "officer A";
    options.command = "take";
    options.correct = correct;
    if (correct) options.reason = "field book read again";
    return fieldfile::take(book_, paths, options);
  }
  Taken take_text(const std::string& name, const std::string& text, bool correct = false) {
    return take({folder_.write(name, text)}, correct);
  }
  /// Takes in what must be good.
  Taken good(const std::string& name, const std::string& text, bool correct = false) {
    Taken taken = take_text(name, text, correct);
    REQUIRE(said(taken) == "0 faults found\n");
    return taken;
  }
  /// Findings, with the folder left out of their paths.
  std::string said(const Taken& taken) const {
    Findings findings = taken.findings;
    for (Finding& finding : findings) {
      const std::size_t at = finding.file.rfind('/');
      if (at != std::string::npos) finding.file.erase(0, at + 1);
      const std::size_t inside = finding.fault.find(folder_.path() + "/");
      if (inside != std::string::npos) finding.fault.erase(inside, folder_.path().size() + 1);
    }
    return describe(findings);
  }
  store::Book& book() { return book_; }
  const Folder& folder() const { return folder_; }

 private:
  Folder folder_;
  store::Book book_;
};

}  // namespace

TEST_CASE("several files, in any order, become one act") {
  Desk desk;
  const std::int64_t before = desk.book().newest_act();
  const Taken taken =
      desk.take({desk.folder().write("stage.csv", kStage), desk.folder().write("g.csv", kGaugings),
                 desk.folder().write("st.csv", kStations)});
  CHECK(desk.said(taken) == "0 faults found\n");
  CHECK(taken.act == before + 1);
  CHECK(desk.book().newest_act() == before + 1);
  REQUIRE(taken.files.size() == 3);
  CHECK(taken.files[0].kind == "stage");
  CHECK(taken.files[0].rows == 3);
  CHECK(taken.files[0].stored == 3);
  CHECK(taken.files[0].stations == std::vector<std::string>{"TAR-1"});
  CHECK(taken.files[1].stored == 2);
  CHECK(taken.files[2].kind == "station");
  CHECK(taken.files[2].stations == std::vector<std::string>{"TAR-1", "TAR-2"});
  const auto gauging = desk.book().gauging("TAR-1", "G2");
  REQUIRE(gauging.has_value());
  CHECK(gauging->value.discharge.m3s() == 25);
  CHECK(gauging->source.line == 3);
  CHECK(desk.book().file(gauging->source.file)->name == "g.csv");
  CHECK(desk.book().file(gauging->source.file)->bytes == static_cast<std::int64_t>(kGaugings.size()));
  CHECK(desk.book().file(gauging->source.file)->sha256 == store::sha256_hex(kGaugings));
}

TEST_CASE("the act names its station where the take concerns one") {
  Desk desk;
  desk.good("st.csv", kStations);
  const Taken gaugings = desk.good("g.csv", kGaugings);
  CHECK(desk.book().act(gaugings.act).station == "TAR-1");
  const Taken stage = desk.good("s.csv", kStage);
  CHECK(desk.book().act(stage.act).station == "TAR-1");
  CHECK(desk.book().act(stage.act).who == "officer A");
}

TEST_CASE("one bad file keeps out the good ones beside it, and all findings are given") {
  Desk desk;
  desk.good("st.csv", kStations);
  const std::int64_t before = desk.book().newest_act();
  const Taken taken =
      desk.take({desk.folder().write("g.csv", kGaugings),
                 desk.folder().write("z.csv", "station,valid_from,gauge_zero_m\nTAR-1,2010-01-01,x\n"),
                 desk.folder().write("s.csv", "station,time,stage_m\nTAR-1,2010-01-01,y\n"),
                 desk.folder().path("none.csv")});
  CHECK(desk.said(taken) ==
        R"(z.csv:2:18: gauge_zero_m is not a number: "x"
    TAR-1,2010-01-01,x
                     ^
  expected: a decimal number with a point, for example 12.5
  to do: write the number alone, without unit or words
s.csv:2:18: stage_m is not a number: "y"
    TAR-1,2010-01-01,y
                     ^
  expected: a plain decimal number with a point, or blank where the reading is missing
  to do: write the number alone, without unit or words, or leave the field blank where there is none
none.csv: there is no such file
  expected: the name of a field file
  to do: check the name and the folder
3 faults found
)");
  CHECK(taken.act == 0);
  CHECK(desk.book().newest_act() == before);
  CHECK(desk.book().gaugings("TAR-1").empty());
  CHECK(desk.book().files().size() == 1);
}

TEST_CASE("taking a file a second time stores nothing and says so") {
  Desk desk;
  desk.good("st.csv", kStations);
  desk.good("g.csv", kGaugings);
  desk.good("s.csv", kStage);
  const std::int64_t before = desk.book().newest_act();
  const Taken gaugings = desk.good("g.csv", kGaugings);
  CHECK(gaugings.act == 0);
  CHECK(gaugings.files[0].stored == 0);
  CHECK(gaugings.files[0].repeated == 2);
  const Taken stage = desk.good("s.csv", kStage);
  CHECK(stage.act == 0);
  CHECK(stage.files[0].repeated == 3);
  CHECK(desk.good("st.csv", kStations).files[0].repeated == 2);
  CHECK(desk.book().newest_act() == before);
}

TEST_CASE("every kind of record repeats as equal, whatever units and zone it is written in") {
  Desk desk;
  desk.good("st.csv", kStations);
  const std::vector<std::string> texts{
      "station,valid_from,gauge_zero_ft,remark\nTAR-1,2010-01-01,410.105,levelled\n",
      "station,valid_from,control,cross_section,flow_law,slope,roughness_n,level_to_ft\n"
      "TAR-1,2010-01-01,channel,X1,manning,0.001,0.035,420.3\n",
      "station,survey,surveyed_at,cross_section,distance_ft,elevation_ft,level_uncertainty_m,mark\n"
      "TAR-1,S1,2010-01-01,X1,0,420.1,0.02,BM1\nTAR-1,S1,,X1,10.1,400,,\nTAR-1,S1,,X1,20.3,421,,\n",
      "station,gauging,start,end,stage_ft,stage_end_ft,discharge_ft3s,uncertainty_pct,stage_uncertainty_m,"
      "area_ft2,"
      "width_ft,velocity_fts,quality,method\n"
      "TAR-1,G1,2010-01-01T10:00,2010-01-01T11:00,4.11,4.13,123.4,7,0.003,71,33,2.3,good,meter\n",
      "station,from,until,add_at_from_ft,add_at_until_ft\nTAR-1,2010-01-01,2010-02-01,0,0.07\n"};
  for (const std::string& text : texts) {
    INFO(text);
    CHECK(desk.good("a.csv", text).files[0].stored == 1);
    const Taken again = desk.good("b.csv", text);
    CHECK(again.files[0].repeated == 1);
    CHECK(again.act == 0);
  }
}

TEST_CASE("a held gauging with other values is a finding that names the held version") {
  Desk desk;
  desk.good("st.csv", kStations);
  const Taken first = desk.good("g.csv", kGaugings);
  const Taken again = desk.take_text("late.csv",
                                     "station,gauging,start,stage_m,discharge_m3s\n"
                                     "TAR-1,G3,2010-03-01T10:00,1.75,25\n"
                                     "TAR-1,G2,2010-02-01T10:00,1.75,26\n");
  CHECK(desk.said(again) ==
        "late.csv:3:7: gauging G2 of TAR-1 is in the book with other values: version 1, act " +
            std::to_string(first.act) +
            ", g.csv line 3\n"
            "    TAR-1,G2,2010-02-01T10:00,1.75,26\n"
            "          ^~\n"
            "  expected: a new record, or the same values as held\n"
            "  to do: to replace the held version take the file in with --correct --reason TEXT\n"
            "1 fault found\n");
  CHECK_FALSE(desk.book().gauging("TAR-1", "G3").has_value());
}

TEST_CASE("a correction writes the next version, a new record is said, an equal one skipped") {
  Desk desk;
  desk.good("st.csv", kStations);
  desk.good("g.csv", kGaugings);
  const Taken taken = desk.good("late.csv",
                                "station,gauging,start,stage_m,discharge_m3s\n"
                                "TAR-1,G1,2010-01-01T10:00,1.25,12.5\n"
                                "TAR-1,G2,2010-02-01T10:00,1.75,26\n"
                                "TAR-1,G3,2010-03-01T10:00,1.75,25\n",
                                true);
  CHECK(taken.files[0].stored == 2);
  CHECK(taken.files[0].repeated == 1);
  CHECK(taken.files[0].remarks ==
        std::vector<std::string>{"gauging G3 of TAR-1 was not in the book: stored as new"});
  CHECK(desk.book().gauging("TAR-1", "G2")->version == 2);
  CHECK(desk.book().gauging("TAR-1", "G2")->value.discharge.m3s() == 26);
  CHECK(desk.book().act(taken.act).reason == "field book read again");
}

TEST_CASE("a correction without a reason is refused") {
  Desk desk;
  TakeOptions options;
  options.who = "officer A";
  options.correct = true;
  const Taken taken = fieldfile::take(desk.book(), {desk.folder().write("st.csv", kStations)}, options);
  CHECK(describe(taken.findings) ==
        "take: a correction has no reason\n"
        "  expected: why held records are replaced\n"
        "  to do: add --reason TEXT\n"
        "1 fault found\n");
}

TEST_CASE("a withdrawn gauging is gone, cannot be withdrawn again, and comes back by correction only") {
  Desk desk;
  desk.good("st.csv", kStations);
  desk.good("g.csv", kGaugings);
  const std::string withdrawal =
      "station,gauging,start,stage_m,discharge_m3s,withdrawn\n"
      "TAR-1,G2,,,,yes\n";
  CHECK(desk.good("w.csv", withdrawal, true).files[0].stored == 1);
  CHECK_FALSE(desk.book().gauging("TAR-1", "G2").has_value());
  CHECK(desk.said(desk.take_text("w.csv", withdrawal, true)) ==
        R"(w.csv:2:7: gauging G2 of TAR-1 is not in the book, or is withdrawn already
    TAR-1,G2,,,,yes
          ^~
  expected: a record that the book holds
  to do: correct the name, or take the line out
1 fault found
)");
  const Taken back = desk.take_text("g.csv", kGaugings);
  CHECK(back.findings.size() == 1);
  CHECK(back.findings[0].remedy == "to bring it back take the file in with --correct --reason TEXT");
  CHECK(desk.good("g.csv", kGaugings, true).files[0].stored == 1);
  CHECK(desk.book().gauging("TAR-1", "G2").has_value());
}

TEST_CASE("a withdrawn survey needs one row only") {
  Desk desk;
  desk.good("st.csv", kStations);
  desk.good("p.csv",
            "station,survey,surveyed_at,cross_section,distance_m,elevation_m\n"
            "TAR-1,S1,2010-01-01,X1,0,10\nTAR-1,S1,,X1,5,8\nTAR-1,S1,,X1,9,10\n");
  CHECK(
      desk.good(
              "w.csv",
              "station,survey,surveyed_at,cross_section,distance_m,elevation_m,withdrawn\nTAR-1,S1,,,,,yes\n",
              true)
          .files[0]
          .stored == 1);
  CHECK_FALSE(desk.book().survey("TAR-1", "S1").has_value());
}

TEST_CASE("two files of one take may repeat but not contradict each other") {
  Desk desk;
  desk.good("st.csv", kStations);
  const std::string a = desk.folder().write("a.csv", kGaugings);
  const std::string b = desk.folder().write(
      "b.csv", "station,gauging,start,stage_m,discharge_m3s\nTAR-1,G2,2010-02-01T10:00,1.75,26\n");
  CHECK(desk.said(desk.take({a, b})) ==
        R"(b.csv:2:7: gauging G2 of TAR-1 is given with other values in a.csv, line 3
    TAR-1,G2,2010-02-01T10:00,1.75,26
          ^~
  expected: the same values in all files of a take
  to do: take one of them out
1 fault found
)");
  const Taken twice = desk.take({a, a});
  CHECK(desk.said(twice) == "0 faults found\n");
  CHECK(twice.files[0].stored == 2);
  CHECK(twice.files[1].repeated == 2);
}

TEST_CASE("a reading that contradicts a held one is a finding with both values") {
  Desk desk;
  desk.good("st.csv", kStations);
  desk.good("s.csv", kStage);
  const std::int64_t before = desk.book().newest_act();
  const Taken taken = desk.take_text("late.csv",
                                     "station,time,stage_m\n"
                                     "TAR-1,2010-01-01T00:15,1.261\n"
                                     "TAR-1,2010-01-01T00:30,1.27\n"
                                     "TAR-1,2010-01-01T00:45,1.28\n");
  CHECK(desk.said(taken) ==
        R"(late.csv:2: station TAR-1 at 2009-12-31T23:15:00Z is held as 1.260 m, given as 1.261 m
    TAR-1,2010-01-01T00:15,1.261
  expected: new times, or the same readings as held
  to do: to replace what the file spans take it in with --correct --reason TEXT
late.csv:3: station TAR-1 at 2009-12-31T23:30:00Z is held as missing, given as 1.270 m
    TAR-1,2010-01-01T00:30,1.27
  expected: new times, or the same readings as held
  to do: to replace what the file spans take it in with --correct --reason TEXT
2 faults found
)");
  CHECK(desk.book().newest_act() == before);
}

TEST_CASE("a reading with another quality contradicts, one that states none repeats") {
  Desk desk;
  desk.good("st.csv", kStations);
  desk.good("s.csv", "station,time,stage_m,quality\nTAR-1,2010-01-01T00:00,1.25,good\n");
  const std::string poor = "station,time,stage_m,quality\nTAR-1,2010-01-01T00:00,1.25,poor\n";
  const Taken taken = desk.take_text("poor.csv", poor);
  REQUIRE(taken.findings.size() == 1);
  CHECK(taken.findings[0].fault == "station TAR-1 at 2009-12-31T23:00:00Z is held as good, given as poor");
  const Taken unsaid = desk.good("unsaid.csv", "station,time,stage_m\nTAR-1,2010-01-01T00:00,1.25\n");
  CHECK(unsaid.files[0].repeated == 1);
  desk.good("poor.csv", poor, true);
  const store::StageBlock block = desk.book().stage_block("TAR-1", utc_month_of(from_ms(1'262'300'400'000)));
  CHECK(block.quality == std::vector<Quality>{Quality::poor});
}

TEST_CASE("a stage correction file replaces what it spans, blank means missing") {
  Desk desk;
  desk.good("st.csv", kStations);
  desk.good("s.csv", kStage);
  desk.good("late.csv", "station,time,stage_m\nTAR-1,2010-01-01T00:00,1.3\nTAR-1,2010-01-01T00:15,\n", true);
  const store::StageBlock block = desk.book().stage_block("TAR-1", utc_month_of(from_ms(1'262'300'400'000)));
  REQUIRE(block.ticks.size() == 3);
  CHECK(block.ticks[0] == 130'000'000);
  CHECK(block.ticks[1] == store::kMissing);
}

TEST_CASE("stage files of one take that contradict each other are found") {
  Desk desk;
  const std::string st = desk.folder().write("st.csv", kStations);
  const std::string a = desk.folder().write("a.csv", kStage);
  const std::string b = desk.folder().write("b.csv", "station,time,stage_m\nTAR-1,2010-01-01T00:15,1.3\n");
  const Taken taken = desk.take({a, b, st});
  REQUIRE(taken.findings.size() == 1);
  CHECK(taken.findings[0].fault == "station TAR-1 at 2009-12-31T23:15:00Z is held as 1.26 m, given as 1.3 m");
  CHECK(desk.book().stations().empty());
}

TEST_CASE("a reach row whose part is a slip of a surveyed one is found, a part surveyed later is not") {
  Desk desk;
  desk.good("st.csv", kStations);
  const std::string survey =
      "station,survey,surveyed_at,cross_section,part,distance_m,elevation_m\n"
      "TAR-1,S1,2010-01-01,X1,floodplain,0,10\nTAR-1,S1,,X1,main,5,8\nTAR-1,S1,,X1,main,9,10\n";
  const auto reach = [](const std::string& part) {
    return "station,valid_from,control,cross_section,part,flow_law,slope,roughness_n\n"
           "TAR-1,2010-01-01,overbank,X1," +
           part + ",manning,0.001,0.06\n";
  };
  CHECK(desk.said(desk.take(
            {desk.folder().write("p.csv", survey), desk.folder().write("r.csv", reach("flodplain"))})) ==
        R"(r.csv:2:30: part "flodplain" is in no survey of cross-section X1
    TAR-1,2010-01-01,overbank,X1,flodplain,manning,0.001,0.06
                                 ^~~~~~~~~
  expected: a part of its surveys: floodplain, main
  to do: write floodplain if that is meant
1 fault found
)");
  desk.good("p.csv", survey);
  CHECK(desk.good("r.csv", reach("right bank")).files[0].stored == 1);
}

TEST_CASE("progress rises to the size of all files") {
  Desk desk;
  TakeOptions options;
  options.who = "officer A";
  std::int64_t last = 0;
  std::int64_t all = 0;
  options.progress = [&](std::int64_t done, std::int64_t total) {
    CHECK(done > last);
    last = done;
    all = total;
  };
  const Taken taken = fieldfile::take(
      desk.book(), {desk.folder().write("st.csv", kStations), desk.folder().write("s.csv", kStage)}, options);
  CHECK(taken.findings.empty());
  CHECK(last == static_cast<std::int64_t>(kStations.size() + kStage.size()));
  CHECK(all == last);
}
