// SPDX-License-Identifier: GPL-3.0-or-later
// stress, check and rank as scripts see them: exit statuses, every field of the JSON, sums that add up.
#include <catch2/catch.hpp>
#include <algorithm>
#include <cmath>
#include <map>
#include <sstream>

#include "tests/app/command/program.hpp"

using namespace binwright::testing;
using nlohmann::json;

namespace {

const std::vector<std::string> kPoint = {"--at", "input_voltage=12V", "--at", "output_voltage=15V", "--at", "output_current=2A", "--at", "ambient=25 °C"};

std::vector<std::string> with(std::vector<std::string> call, const std::vector<std::string>& more) {
    call.insert(call.end(), more.begin(), more.end());
    return call;
}

struct Demo : Folder {
    Demo() {
        for (const char* name : {"tide-gauge.toml", "lantern.toml", "bilge-alarm.toml"}) write(std::string("app/demo/") + name, source_file(std::string("app/demo/") + name));
        gauge = "app/demo/tide-gauge.toml";
    }
    std::string gauge;
};

void needs(const json& object, const std::vector<std::string>& fields) {
    for (const std::string& field : fields) {
        INFO(field);
        CHECK(object.contains(field));
    }
}

/// No number anywhere that JSON does not know; the parser would already have refused NaN.
void finding_is_sound(const json& finding) {
    INFO(finding.dump(2));
    needs(finding, {"rule", "stress", "rating", "limit", "used", "left", "headroom", "verdict", "at", "made_of", "rests_on", "text", "remedies"});
    const std::string verdict = finding.at("verdict");
    CHECK((verdict == "holds" || verdict == "unproven" || verdict == "rejected" || verdict == "not covered"));
    CHECK_FALSE(finding.at("text").get<std::string>().empty());
    if (finding.at("stress").is_number() && !finding.at("made_of").empty()) {
        double sum = 0, size = 1e-12;
        for (const auto& [name, value] : finding.at("made_of").items()) {
            sum += value.get<double>();
            size += std::abs(value.get<double>());
        }
        CHECK(std::abs(sum - finding.at("stress").get<double>()) <= 1e-9 * size);
    }
    for (const json& remedy : finding.at("remedies")) {
        needs(remedy, {"do", "figure", "usual", "text"});
        CHECK_FALSE(remedy.at("text").get<std::string>().empty());
    }
}

}  // namespace

TEST_CASE("stress at one point gives that point alone, with every field at its place", "[app][stress]") {
    const Demo folder;
    const Answer answer = folder.run(with({"stress", folder.gauge, "--json"}, kPoint));
    INFO(answer.err);
    REQUIRE(answer.status == 0);
    const json body = answer.json();
    CHECK(answer.out.starts_with("{\n  \"format\": 1,\n  \"command\": \"stress\""));
    REQUIRE(body.at("points").size() == 1);
    const json& point = body.at("points")[0];
    needs(point, {"input_voltage", "output_voltage", "output_current", "frequency", "ambient", "reached", "duty", "mode", "rectifier_fraction", "warnings", "input_current_average",
                  "output_voltage_average", "output_ripple", "efficiency", "seats", "windings"});
    CHECK(point.at("input_voltage") == 12.0);
    CHECK(point.at("output_voltage") == 15.0);
    CHECK(point.at("output_current") == 2.0);
    CHECK(point.at("frequency") == 1e5);
    CHECK(point.at("ambient").get<double>() == Approx(25));  // °C
    CHECK(point.at("reached") == true);
    CHECK(point.at("mode") == "continuous");
    CHECK(point.at("output_voltage_average").get<double>() == Approx(15).epsilon(1e-7));
    needs(point.at("seats").at("switch"), {"voltage_peak", "current_peak", "current_rms", "current_average", "current_turn_on", "current_turn_off"});
    needs(point.at("seats").at("rectifier"), {"reverse_voltage_peak", "current_peak", "current_rms", "current_average"});
    for (const char* seat : {"input_capacitor", "coupling_capacitor", "output_capacitor"})
        needs(point.at("seats").at(seat), {"voltage_average", "voltage_max", "voltage_min", "current_rms"});
    for (const char* winding : {"primary", "secondary"}) needs(point.at("windings").at(winding), {"current_average", "current_rms", "current_peak", "current_min"});
    // What a sepic is known for: its switch and its rectifier see input and output together (common practice, no source).
    CHECK(point.at("seats").at("switch").at("voltage_peak").get<double>() > 27.0);
    CHECK(point.at("seats").at("rectifier").at("reverse_voltage_peak").get<double>() > 26.5);
    CHECK(point.at("seats").at("rectifier").at("current_average").get<double>() == Approx(2).epsilon(1e-6));
    const json& worst = body.at("worst");
    CHECK(worst.at("seats").at("switch").at("voltage_peak").at("value") == point.at("seats").at("switch").at("voltage_peak"));
    CHECK(worst.at("seats").at("switch").at("voltage_peak").at("at").at("input_voltage") == 12.0);
    CHECK(worst.at("windings").at("primary").at("current_peak").at("value") == point.at("windings").at("primary").at("current_peak"));
}

TEST_CASE("stress over the range is nowhere below one of its points, and says where", "[app][stress]") {
    const Demo folder;
    const Answer answer = folder.run({"stress", folder.gauge, "--json"});
    INFO(answer.err);
    REQUIRE(answer.status == 0);
    const json body = answer.json();
    CHECK(body.at("points").size() > 1);
    const json& peak = body.at("worst").at("seats").at("switch").at("voltage_peak");
    for (const json& point : body.at("points")) CHECK(point.at("seats").at("switch").at("voltage_peak").get<double>() <= peak.at("value").get<double>());
    CHECK(peak.at("at").at("input_voltage") == 15.0);
    CHECK(folder.run({"stress", folder.gauge}).out.find("voltage peak") != std::string::npos);
}

TEST_CASE("a flyback lists its magnetising current, and a buck no coupling capacitor", "[app][stress]") {
    const Folder folder;
    REQUIRE(folder.run({"new", "flyback", "-o", "f.toml"}).status == 0);
    const json flyback = folder.run({"stress", "f.toml", "--at", "input_voltage=12V", "--json"}).json().at("points")[0];
    needs(flyback.at("windings"), {"primary", "secondary", "magnetising"});
    REQUIRE(folder.run({"new", "buck", "-o", "b.toml"}).status == 0);
    const json buck = folder.run({"stress", "b.toml", "--at", "input_voltage=12V", "--json"}).json().at("points")[0];
    CHECK_FALSE(buck.at("seats").contains("coupling_capacitor"));
    CHECK_FALSE(buck.at("windings").contains("secondary"));
    CHECK_FALSE(buck.at("windings").contains("magnetising"));
}

TEST_CASE("a duty runs the converter unregulated, and a point out of reach ends in 1 and says what can be had", "[app][stress]") {
    const Demo folder;
    const Answer run = folder.run({"stress", folder.gauge, "--at", "duty=0.5", "--at", "input_voltage=12V", "--at", "output_current=2A", "--json"});
    CHECK(run.status == 0);
    const json point = run.json().at("points")[0];
    CHECK(point.at("duty") == 0.5);
    CHECK(point.at("output_voltage") == point.at("output_voltage_average"));
    const Answer missed = folder.run({"stress", folder.gauge, "--at", "output_voltage=500V", "--json"});
    CHECK(missed.status == 1);
    CHECK(missed.json().at("points")[0].at("reached") == false);
    CHECK(missed.json().at("points")[0].at("highest_output").get<double>() < 500);
    CHECK(folder.run({"stress", folder.gauge, "--at", "output_voltage=500V"}).out.find("not reached") != std::string::npos);
    CHECK(folder.run({"stress", folder.gauge, "--at", "inptu_voltage=5V"}).err.ends_with("--at: unknown key `inptu_voltage`; did you mean `input_voltage`?\n"));
    CHECK(folder.run({"stress", folder.gauge, "--at", "duty=1.5"}).status == 2);
}

TEST_CASE("the option waveforms writes one period whose mean is the point's", "[app][stress]") {
    const Demo folder;
    const Answer answer = folder.run(with({"stress", folder.gauge, "--json", "--waveforms", "waves.csv"}, kPoint));
    REQUIRE(answer.status == 0);
    std::istringstream lines(folder.read("waves.csv"));
    std::string line, cell;
    std::getline(lines, line);
    CHECK(line.starts_with("time [s],"));
    std::vector<std::string> names;
    std::istringstream head(line);
    while (std::getline(head, cell, ',')) names.push_back(cell);
    const auto column = static_cast<std::size_t>(std::find(names.begin(), names.end(), "rectifier.current [A]") - names.begin());
    REQUIRE(column < names.size());
    std::vector<double> time, current;
    while (std::getline(lines, line)) {
        std::istringstream row(line);
        for (std::size_t k = 0; std::getline(row, cell, ','); ++k) {
            if (k == 0) time.push_back(std::stod(cell));
            if (k == column) current.push_back(std::stod(cell));
        }
    }
    REQUIRE(time.size() == current.size());
    REQUIRE(time.size() > 100);
    double charge = 0;
    for (std::size_t k = 1; k < time.size(); ++k) charge += 0.5 * (current[k] + current[k - 1]) * (time[k] - time[k - 1]);
    CHECK(time.back() == Approx(1e-5));
    CHECK(charge / time.back() == Approx(2.0).epsilon(2e-3));  // the rectifier's mean is the load current
    const Answer piped = folder.run(with({"stress", folder.gauge, "--waveforms", "-"}, kPoint));
    CHECK(piped.out == folder.read("waves.csv"));
}

TEST_CASE("check tells every seat, every finding and where the power goes, and its exit status is its verdict", "[app][check]") {
    const Demo folder;
    const Answer answer = folder.run({"--bin", "demo", "check", folder.gauge, "--json"});
    INFO(answer.err);
    const json body = answer.json();
    CHECK(answer.out.starts_with("{\n  \"format\": 1,\n  \"command\": \"check\""));
    const std::string verdict = body.at("verdict");
    CHECK(answer.status == (verdict == "holds" ? 0 : verdict == "rejected" ? 1 : 3));
    std::vector<std::string> seats;
    for (const json& seat : body.at("seats")) {
        needs(seat, {"seat", "reference", "lot", "verdict", "findings"});
        seats.push_back(seat.at("seat"));
        CHECK_FALSE(seat.at("findings").empty());
        for (const json& finding : seat.at("findings")) finding_is_sound(finding);
    }
    for (const char* seat : {"switch", "rectifier", "input_capacitor", "coupling_capacitor", "output_capacitor"}) CHECK(std::count(seats.begin(), seats.end(), seat) == 1);
    needs(body, {"efficiency_total", "losses", "not_included", "assumptions", "cautions", "rulebook", "summary"});
    CHECK(body.at("rulebook") == "house");
    CHECK(body.at("efficiency_total").get<double>() > 0.5);
    CHECK(body.at("efficiency_total").get<double>() < 1);
    CHECK_FALSE(body.at("losses").empty());
    CHECK_FALSE(body.at("cautions").empty());
}

TEST_CASE("check for people begins with the sentence over everything and ends with the cautions", "[app][check]") {
    const Demo folder;
    const Answer full = folder.run({"--bin", "demo", "check", folder.gauge}), quiet = folder.run({"--bin", "demo", "check", folder.gauge, "--quiet"});
    const json body = folder.run({"--bin", "demo", "check", folder.gauge, "--json"}).json();
    CHECK(full.out.starts_with("Tide-gauge radio supply\n"));
    const std::string summary = body.at("summary");
    CHECK(full.out.find(summary.substr(0, 40)) != std::string::npos);
    for (const json& seat : body.at("seats")) CHECK(full.out.find(seat.at("reference").get<std::string>()) != std::string::npos);
    CHECK(full.out.find("before power goes on\n") != std::string::npos);
    CHECK(quiet.out.size() < full.out.size());
    CHECK(full.out.starts_with(quiet.out.substr(0, quiet.out.size() - 1)));
    CHECK(full.out.find("\x1b[") == std::string::npos);
    CHECK(folder.run({"--bin", "demo", "check", folder.gauge, "--color=always"}).out.find("\x1b[") != std::string::npos);
}

TEST_CASE("a 20 V part that held at 15 V is rejected at 22 V, with the numbers and the part that would hold", "[app][check]") {
    const Demo folder;
    const Answer answer = folder.run({"--bin", "demo", "check", folder.gauge, "--json", "--with", "operating.output_voltage=[\"9 V\", \"22 V\"]"});
    CHECK(answer.status == 1);
    json output;
    const json body = answer.json();
    for (const json& seat : body.at("seats"))
        if (seat.at("seat") == "output_capacitor") output = seat;
    CHECK(output.at("verdict") == "rejected");
    bool voltage = false;
    for (const json& finding : output.at("findings")) {
        if (finding.at("verdict") != "rejected" || finding.at("rating") != 20.0) continue;
        voltage = true;
        CHECK(finding.at("stress").get<double>() > 22.0);
        CHECK(finding.at("used").get<double>() == Approx(finding.at("stress").get<double>() / 20));
        CHECK(finding.at("left").get<double>() == Approx(finding.at("limit").get<double>() - finding.at("stress").get<double>()));
        CHECK(finding.at("headroom").get<double>() == Approx(1 - finding.at("stress").get<double>() / finding.at("limit").get<double>()));
        bool mend = false;
        for (const json& remedy : finding.at("remedies"))
            if (remedy.at("do") == "rating") {
                mend = true;
                CHECK(remedy.at("figure") == "U_R");
                CHECK(remedy.at("at_least").get<double>() > 22.0);
                CHECK(remedy.at("usual").get<double>() >= remedy.at("at_least").get<double>());
            }
        CHECK(mend);
    }
    CHECK(voltage);
    CHECK(folder.read(folder.gauge) == source_file(folder.gauge));  // --with is not written back
}

TEST_CASE("rank lists every lot of the family, best first, with numbers for each rejection", "[app][rank]") {
    const Demo folder;
    const Answer answer = folder.run({"--bin", "demo", "rank", folder.gauge, "output_capacitor", "--json"});
    INFO(answer.err);
    REQUIRE(answer.status == 0);
    const json body = answer.json();
    const json capacitors = folder.run({"--bin", "demo", "bin", "list", "--family", "capacitor", "--json"}).json().at("lots");
    CHECK(body.at("candidates").size() == capacitors.size());
    const std::vector<std::string> order = {"holds", "unproven", "not covered", "rejected"};
    std::size_t before = 0;
    std::map<std::string, int> counts;
    for (const json& candidate : body.at("candidates")) {
        needs(candidate, {"lot", "part", "verdict", "findings", "knock_on"});
        const std::string verdict = candidate.at("verdict");
        ++counts[verdict];
        const auto rank = static_cast<std::size_t>(std::find(order.begin(), order.end(), verdict) - order.begin());
        REQUIRE(rank < order.size());
        CHECK(rank >= before);
        before = rank;
        for (const json& finding : candidate.at("findings")) finding_is_sound(finding);
        if (verdict == "rejected") {
            const std::string text = candidate.at("findings")[0].at("text");
            CHECK(text.find_first_of("0123456789") != std::string::npos);
        }
    }
    for (const char* verdict : {"holds", "unproven", "rejected"}) CHECK(counts[verdict] > 0);

    const Answer text = folder.run({"--bin", "demo", "rank", folder.gauge, "output_capacitor"});
    CHECK(text.status == 0);
    for (const json& candidate : body.at("candidates")) CHECK(text.out.find(candidate.at("lot").get<std::string>()) != std::string::npos);
    CHECK(folder.run({"--bin", "demo", "rank", folder.gauge, "C3", "--json"}).json().at("candidates") == body.at("candidates"));
    CHECK(folder.run({"--bin", "demo", "rank", folder.gauge, "output_capacitor", "-n", "2", "--json"}).json().at("candidates").size() == 2);
    CHECK(folder.run({"--bin", "demo", "rank", folder.gauge, "output_capactor"}).err == folder.gauge + ": this sepic has no seat \"output_capactor\"; did you mean \"output_capacitor\"?\n");
}

TEST_CASE("rank ends in 1 where no lot holds and in 3 where the best is unproven", "[app][rank]") {
    const Demo folder;
    REQUIRE(folder.run({"bin", "add", "capacitor", "6 V film", "--figure", "C=100uF", "--figure", "U_R=6.3V", "--figure", "ESR=10m", "--figure", "I_R~=5 A @ 100 kHz", "--figure", "T_max=105 °C",
                        "--attribute", "technology=film", "--known", "marked"})
                .status == 0);
    REQUIRE(folder.run({"new", "boost", "-o", "plain.toml"}).status == 0);  // bare elements: no lot of the bin is named
    CHECK(folder.run({"rank", "plain.toml", "output_capacitor"}).status == 1);
    REQUIRE(folder.run({"bin", "add", "capacitor", "63 V film, nothing else known", "--figure", "U_R=63V", "--attribute", "technology=film", "--known", "marked"}).status == 0);
    const Answer answer = folder.run({"rank", "plain.toml", "output_capacitor", "--json"});
    CHECK(answer.status == 3);
    CHECK(answer.json().at("candidates")[0].at("verdict") == "unproven");
}

TEST_CASE("the demo's converter finds the demo's bin by itself, and says so", "[app][demo]") {
    Demo folder;
    folder.environment.erase("BINWRIGHT_BIN");
    const std::vector<std::string> before = folder.files();
    const Answer fresh = folder.run({"rank", folder.gauge, "output_capacitor"});
    CHECK(fresh.status == 0);
    CHECK(fresh.err == "using the demo bin (in memory); your own bin does not exist yet\n");
    CHECK(fresh.out == folder.run({"--bin", "demo", "rank", folder.gauge, "output_capacitor"}).out);
    CHECK(folder.files() == before);
    CHECK(folder.run({"rank", folder.gauge, "output_capacitor", "--quiet"}).err.empty());
    const json body = folder.run({"rank", folder.gauge, "output_capacitor", "--json"}).json();
    CHECK(body.at("notes")[0] == "using the demo bin (in memory); your own bin does not exist yet");
    // The demo's labels belong to the demo's bin: a bin of one's own does not change what the demo says.
    REQUIRE(folder.run({"bin", "add", "switch", "a switch of mine"}).status == 0);
    const Answer later = folder.run({"rank", folder.gauge, "output_capacitor"});
    CHECK(later.out == fresh.out);
    CHECK(later.err.starts_with("using the demo bin (in memory); for your own bin: --bin "));
}

TEST_CASE("a lot that the bin does not have is named with its place and with the bin", "[app][demo]") {
    const Folder folder;
    folder.write("mine.toml", "kind = \"converter\"\nformat = 1\ntopology = \"buck\"\n[operating]\ninput_voltage = \"12 V\"\noutput_voltage = \"5 V\"\noutput_current = \"1 A\"\n"
                              "frequency = \"100 kHz\"\nambient = \"25 °C\"\n[seat.switch]\nfitted = \"417-H\"\n");
    REQUIRE(folder.run({"bin", "add", "switch", "a switch"}).status == 0);
    const Answer answer = folder.run({"check", "mine.toml"});
    CHECK(answer.status == 2);
    CHECK(answer.err.starts_with("mine.toml:11:10: "));
    CHECK(answer.err.find("417-H") != std::string::npos);
    CHECK(answer.err.find(folder.path("own bin.binwright").string()) != std::string::npos);
}

TEST_CASE("a converter comes through standard input as well", "[app][check]") {
    const Demo folder;
    const Answer answer = folder.run(with({"--bin", "demo", "stress", "-", "--json"}, kPoint), source_file("app/demo/tide-gauge.toml"));
    CHECK(answer.status == 0);
    CHECK(folder.run({"check", "-"}, "kind = \"converter\"\n").err.starts_with("-"));
}

TEST_CASE("a reader that has seen enough is no error, and a full disk is", "[app][streams]") {
    const Demo folder;
    const Answer closed = folder.start({"/bin/sh", "-c", "( \"$0\" --bin demo rank " + folder.gauge + " output_capacitor; echo \"ended in $?\" >&2 ) | true", BINWRIGHT_PROGRAM});
    CHECK(closed.err.find("ended in 0") != std::string::npos);
    const Answer full = folder.start({"/bin/sh", "-c", "\"$0\" help figures >/dev/full", BINWRIGHT_PROGRAM});
    CHECK(full.status == 4);
    CHECK(full.err == "standard output cannot be written: No space left on device\n");
    CHECK(folder.run({"new", "boost", "-o", "/dev/full"}).status == 4);
}

TEST_CASE("a new converter of every kind can be checked at once, and is unproven: nothing is fitted", "[app][new]") {
    const Folder folder;
    for (const char* kind : {"buck", "boost", "sepic"}) {
        INFO(kind);
        const std::string file = std::string(kind) + ".toml";
        CHECK(folder.run({"new", kind, "-o", file}).status == 0);
        const std::string text = folder.read(file);
        CHECK(folder.run({"new", kind}).out == text);
        CHECK(folder.run({"stress", file}).status == 0);
        const Answer answer = folder.run({"check", file});
        INFO(answer.out << answer.err);
        CHECK(answer.status == 3);
        const Answer again = folder.run({"new", kind, "-o", file});
        CHECK(again.status == 2);
        CHECK(again.err == file + ": is there already and is left as it is (add --sure to replace it)\n");
        CHECK(folder.read(file) == text);
        CHECK(folder.run({"new", kind, "-o", file, "--sure", "--title", "Other"}).status == 0);
        CHECK(folder.read(file) != text);
    }
}

TEST_CASE("rulebooks are listed, shown with their reasons, and refused with every fault at its place", "[app][rulebook]") {
    const Folder folder;
    const json books = folder.run({"rulebook", "list", "--json"}).json().at("rulebooks");
    CHECK(books[0].at("name") == "house");
    const json house = folder.run({"rulebook", "show", "house", "--json"}).json();
    CHECK(house.at("rules").size() == books[0].at("rules"));
    for (const json& rule : house.at("rules")) {
        INFO(rule.dump());
        CHECK_FALSE(rule.at("why").get<std::string>().empty());
        CHECK_FALSE(rule.at("source").get<std::string>().empty());
    }
    CHECK(folder.run({"rulebook", "show"}).out.starts_with("house"));
    const std::string text = source_file("engine/rule/rulebooks/house.toml");
    folder.write("mine.toml", text);
    CHECK(folder.run({"rulebook", "validate", "mine.toml"}).status == 0);
    folder.write("bad.toml", text + "\n[[rule]]\nid = \"x\"\nfor = \"capaciter\"\n");
    const Answer bad = folder.run({"rulebook", "validate", "bad.toml"});
    CHECK(bad.status == 2);
    CHECK(bad.err.starts_with("bad.toml:"));
    const Answer used = folder.run({"check", "none.toml", "--rulebook", "bad.toml"});
    CHECK(used.status == 2);
    CHECK(used.err == bad.err);
}
