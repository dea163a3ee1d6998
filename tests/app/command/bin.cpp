// SPDX-License-Identifier: GPL-3.0-or-later
// The bin from the command line: made, filled, searched, measured, changed and taken back; never touched by what fails.
#include <catch2/catch.hpp>
#include <cstdlib>
#include <filesystem>

#include "tests/app/command/program.hpp"

using namespace binwright::testing;
using nlohmann::json;

namespace {

const std::vector<std::string> kRectifier = {"bin",         "add",  "rectifier",  "Schottky 60 V 15 A", "--figure", "V_RRM=60V",
                                             "--figure",    "I_F(AV)=15 A",       "--figure", "Vf=0.62 V max @ 15 A, 25 °C",
                                             "--attribute", "technology=schottky", "--known", "marked", "--count", "3",
                                             "--place",     "Shed / A3",          "--origin", "pulled", "--donor", "a dead set", "--note", "short leads",
                                             "--date-code", "9912"};
constexpr const char* kBin = "own bin.binwright";

std::vector<std::string> with(std::vector<std::string> call, const std::vector<std::string>& more) {
    call.insert(call.end(), more.begin(), more.end());
    return call;
}

json only_lot(const Folder& folder) {
    const json lots = folder.run({"bin", "list", "--json"}).json().at("lots");
    REQUIRE(lots.size() == 1);
    return lots[0];
}

std::string label_of(const Folder& folder) { return only_lot(folder).at("lot"); }

}  // namespace

TEST_CASE("bin add makes the bin, the type and the lot, and says the label", "[app][bin]") {
    const Folder folder;
    const Answer answer = folder.run(kRectifier);
    INFO(answer.out << answer.err);
    CHECK(answer.status == 0);
    CHECK(answer.err == "made the bin " + folder.path(kBin).string() + "\n");
    const json lot = only_lot(folder);
    CHECK(answer.out.find(lot.at("lot").get<std::string>()) != std::string::npos);
    CHECK(lot.at("part") == "Schottky 60 V 15 A");
    CHECK(lot.at("family") == "rectifier");
    CHECK(lot.at("count") == 3);
    CHECK(lot.at("place") == "Shed / A3");
    CHECK(lot.at("origin") == "pulled");
    CHECK(lot.at("donor") == "a dead set");
    CHECK(lot.at("note") == "short leads");
    CHECK(lot.at("date_code") == "9912");
    const json shown = folder.run({"bin", "show", lot.at("lot"), "--json"}).json();
    CHECK(shown.at("attributes") == json{{"technology", "schottky"}});
    json forward;
    for (const json& figure : shown.at("figures"))
        if (figure.at("symbol") == "V_F") forward = figure;
    CHECK(forward.at("worst").get<double>() == Approx(0.62));
    CHECK(forward.at("known") == "marked");
    CHECK(forward.at("column") == "max");
    CHECK(forward.at("at").at("current").get<double>() == Approx(15));
    CHECK(forward.at("at").at("temperature").get<double>() == Approx(25));  // °C
}

TEST_CASE("a label is taken with or without its check letter, and never with a wrong one", "[app][bin]") {
    const Folder folder;
    REQUIRE(folder.run(kRectifier).status == 0);
    const std::string label = label_of(folder);
    const std::string number = label.substr(0, label.find('-'));
    for (const std::string& spelt : {label, number, number + static_cast<char>(std::tolower(label.back()))}) CHECK(folder.run({"bin", "show", spelt}).status == 0);
    const char wrong = label.back() == 'A' ? 'B' : 'A';
    const Answer answer = folder.run({"bin", "show", number + "-" + wrong});
    CHECK(answer.status == 2);
    CHECK_FALSE(answer.err.empty());
}

TEST_CASE("a type that is known is not made twice", "[app][bin]") {
    const Folder folder;
    REQUIRE(folder.run(kRectifier).status == 0);
    REQUIRE(folder.run({"bin", "add", "schottky 60 v 15 a", "--count", "2"}).status == 0);
    CHECK(folder.run({"bin", "list", "--json"}).json().at("lots").size() == 2);
    CHECK(folder.run({"bin", "add", "rectifier", "Schottky 60 V 15 A", "--figure", "V_RRM=60V", "--known", "marked"}).status == 0);
    const Answer other = folder.run({"bin", "add", "rectifier", "Schottky 60 V 15 A", "--figure", "V_RRM=45V", "--known", "marked"});
    CHECK(other.status == 2);
    CHECK(other.err == "the type \"Schottky 60 V 15 A\" is in this bin already, with other figures; `binwright bin edit` changes them, or give this one another name\n");
    CHECK(folder.run({"bin", "add", "switch", "Schottky 60 V 15 A"}).err == "\"Schottky 60 V 15 A\" is in this bin already, as a rectifier\n");
}

TEST_CASE("a part type that came with the program is enough of a description", "[app][bin]") {
    const Folder folder;
    const json types = folder.run({"bin", "list", "--types", "--json"}).json().at("types");
    REQUIRE(types.size() >= 90);
    const std::string name = types[0].at("part");
    CHECK(folder.run({"bin", "add", name, "--count", "4"}).status == 0);
    CHECK(only_lot(folder).at("part") == name);
}

TEST_CASE("bin take and put count, and no more can be taken than there is", "[app][bin]") {
    const Folder folder;
    REQUIRE(folder.run(kRectifier).status == 0);
    const std::string label = label_of(folder);
    CHECK(folder.run({"bin", "take", label, "2"}).status == 0);
    CHECK(only_lot(folder).at("count") == 1);
    const std::string before = folder.read(kBin);
    const Answer answer = folder.run({"bin", "take", label, "2"});
    CHECK(answer.status == 2);
    CHECK(answer.err == label + " has 1 piece: 2 cannot be taken\n");
    CHECK(folder.read(kBin) == before);
    CHECK(folder.run({"bin", "put", label, "5", "--place", "Shed / B1"}).status == 0);
    CHECK(only_lot(folder).at("count") == 6);
    CHECK(only_lot(folder).at("place") == "Shed / B1");
}

TEST_CASE("bin measure adds a reading with its conditions, its date and its method", "[app][bin]") {
    const Folder folder;
    REQUIRE(folder.run({"bin", "add", "capacitor", "Al 470 µF 25 V", "--figure", "C=470uF", "--figure", "U_R=25V", "--attribute", "technology=aluminium", "--known", "marked"}).status == 0);
    const std::string label = label_of(folder);
    CHECK(folder.run({"bin", "measure", label, "ESR=38m@100kHz", "--date", "2026-03-01", "--method", "ESR meter"}).status == 0);
    const json shown = folder.run({"bin", "show", label, "--json"}).json();
    REQUIRE(shown.at("readings").size() == 1);
    const json reading = shown.at("readings")[0];
    CHECK(reading.at("symbol") == "ESR");
    CHECK(reading.at("worst").get<double>() == Approx(0.038));
    CHECK(reading.at("at").at("frequency").get<double>() == Approx(1e5));
    CHECK(reading.at("known") == "measured");
    CHECK(reading.at("date") == "2026-03-01");
    CHECK(reading.at("method") == "ESR meter");
    CHECK(reading.at("set_aside") == false);
    const std::string number = std::to_string(reading.at("reading").get<long>());
    CHECK(folder.run({"bin", "edit", label, "--set-aside", number}).status == 0);
    CHECK(folder.run({"bin", "show", label, "--json"}).json().at("readings")[0].at("set_aside") == true);
    CHECK(folder.run({"bin", "edit", label, "--count-again", number}).status == 0);
    CHECK(folder.run({"bin", "show", label, "--json"}).json().at("readings")[0].at("set_aside") == false);

    const std::string before = folder.read(kBin);
    const Answer wild = folder.run({"bin", "measure", label, "ESR=38"});
    CHECK(wild.status == 2);
    const Answer implausible = folder.run({"bin", "measure", label, "ESR=38 ohm"});
    CHECK(implausible.status == 2);
    CHECK(implausible.err == "an ESR of 38 Ω on 470 µF is far beyond even a dried-out part; add --sure if it is meant\n");
    CHECK(folder.run({"bin", "measure", label, "ESR=40m", "--date", "2026-02-30"}).err == "--date: \"2026-02-30\" is no date; it is written 2026-03-01\n");
    CHECK(folder.run({"bin", "measure", label, "ESR=40m", "--date", "2999-01-01"}).err == "--date: 2999-01-01 is still to come\n");
    CHECK(folder.read(kBin) == before);
    CHECK(folder.run({"bin", "measure", label, "ESR=38 ohm", "--sure"}).status == 0);
    CHECK(folder.run({"bin", "show", label, "--json"}).json().at("readings").size() == 2);
}

TEST_CASE("bin edit changes what is said of a lot, and of a type", "[app][bin]") {
    const Folder folder;
    REQUIRE(folder.run(kRectifier).status == 0);
    const std::string label = label_of(folder);
    CHECK(folder.run({"bin", "edit", label, "--place", "Shed / B2", "--origin", "surplus", "--note", "", "--count", "7"}).status == 0);
    const json lot = only_lot(folder);
    CHECK(lot.at("place") == "Shed / B2");
    CHECK(lot.at("origin") == "surplus");
    CHECK(lot.at("note") == "");
    CHECK(lot.at("count") == 7);
    CHECK(folder.run({"bin", "edit", "Schottky 60 V 15 A", "--figure", "Ir=1 mA max @ 60 V, 25 °C", "--known", "datasheet"}).status == 0);
    const json figures = folder.run({"bin", "show", label, "--json"}).json().at("figures");
    bool found = false;
    for (const json& figure : figures) found = found || (figure.at("symbol") == "I_R" && figure.at("known") == "datasheet");
    CHECK(found);
    CHECK(folder.run({"bin", "edit", label}).err == "nothing is said to change; see `binwright bin edit --help`\n");
    CHECK(folder.run({"bin", "edit", label, "--place", "Shed / B2"}).err == "nothing to change\n");
    CHECK(folder.run({"bin", "edit", "Schottky 60 V 15 A", "--place", "x"}).status == 2);
    CHECK(folder.run({"bin", "edit", label, "--name", "x"}).status == 2);
}

TEST_CASE("undo takes a change back, redo makes it again, and the history tells", "[app][bin]") {
    const Folder folder;
    REQUIRE(folder.run(kRectifier).status == 0);
    const json before = folder.run({"bin", "list", "--json"}).json();
    const std::string label = label_of(folder);
    REQUIRE(folder.run({"bin", "take", label, "1"}).status == 0);
    const json after = folder.run({"bin", "list", "--json"}).json();
    CHECK(after != before);
    const json history = folder.run({"bin", "history", "--json"}).json().at("history");
    CHECK(history[0].at("what").get<std::string>().find(label) != std::string::npos);
    const Answer dry = folder.run({"bin", "undo", "--dry-run"});
    CHECK(dry.out == "would take back: " + history[0].at("what").get<std::string>() + "\n");
    CHECK(folder.run({"bin", "list", "--json"}).json() == after);
    CHECK(folder.run({"bin", "undo"}).out == "taken back: " + history[0].at("what").get<std::string>() + "\n");
    CHECK(folder.run({"bin", "list", "--json"}).json() == before);
    CHECK(folder.run({"bin", "history", "--json"}).json().at("history")[0].at("undone") == true);
    CHECK(folder.run({"bin", "redo"}).status == 0);
    CHECK(folder.run({"bin", "list", "--json"}).json() == after);
    CHECK(folder.run({"bin", "redo"}).status == 2);
    for (std::size_t k = history.size(); k-- > 0;) CHECK(folder.run({"bin", "undo"}).status == 0);
    const Answer end = folder.run({"bin", "undo"});
    CHECK(end.status == 2);
    CHECK(end.err == folder.path(kBin).string() + ": there is nothing to undo\n");
    CHECK(folder.run({"bin", "list", "--json"}).json().at("lots").empty());
}

TEST_CASE("a dry run says what would change and changes nothing", "[app][bin]") {
    const Folder folder;
    const std::vector<std::string> nothing = folder.files();
    const Answer first = folder.run(with(kRectifier, {"--dry-run"}));
    CHECK(first.status == 0);
    CHECK(first.out.starts_with("would add 3 pieces of Schottky 60 V 15 A"));
    CHECK(folder.files() == nothing);
    REQUIRE(folder.run(kRectifier).status == 0);
    const std::string label = label_of(folder), before = folder.read(kBin);
    for (const std::vector<std::string>& call : std::vector<std::vector<std::string>>{
             {"bin", "take", label, "1"}, {"bin", "put", label, "1"}, {"bin", "edit", label, "--note", "x"}, {"bin", "measure", label, "Vf=0.6 V @ 15 A"}, {"bin", "undo"}}) {
        const Answer answer = folder.run(with(call, {"--dry-run"}));
        INFO(call[1]);
        CHECK(answer.status == 0);
        CHECK(answer.out.starts_with("would "));
        CHECK(folder.read(kBin) == before);
        const json body = folder.run(with(call, {"--dry-run", "--json"})).json();
        CHECK(body.at("dry_run") == true);
        CHECK(folder.read(kBin) == before);
    }
}

TEST_CASE("a command that fails leaves the bin as it was, to the byte", "[app][bin]") {
    const Folder folder;
    REQUIRE(folder.run(kRectifier).status == 0);
    const std::string label = label_of(folder), before = folder.read(kBin);
    const std::vector<std::string> files = folder.files();
    for (const std::vector<std::string>& call : std::vector<std::vector<std::string>>{
             {"bin", "add", "switch", "bad", "--figure", "V_DSS=60"}, {"bin", "take", label, "99"}, {"bin", "take", "999", "1"}, {"bin", "measure", label, "ESR=1 ohm"},
             {"bin", "edit", label, "--origin", "found"}, {"bin", "edit", label, "--set-aside", "77"}, {"bin", "redo"}, {"bin", "edit", "nobody", "--note", "x"}}) {
        INFO(call[1] << ' ' << (call.size() > 2 ? call[2] : std::string()));
        CHECK(folder.run(call).status == 2);
        CHECK(folder.read(kBin) == before);
    }
    CHECK(folder.files() == files);
}

TEST_CASE("bin find looks in words and figures, and ends in 1 when nothing matches", "[app][bin]") {
    const Folder folder;
    REQUIRE(folder.run(kRectifier).status == 0);
    REQUIRE(folder.run({"bin", "add", "switch", "N 55 V", "--figure", "V_DSS=55V", "--known", "marked", "--place", "Hut"}).status == 0);
    const auto found = [&](const std::vector<std::string>& words) {
        const Answer answer = folder.run(with({"bin", "find", "--json"}, words));
        const json lots = answer.json().at("lots");
        CHECK(answer.status == (lots.empty() ? 1 : 0));
        return lots.size();
    };
    CHECK(found({"schottky"}) == 1);
    CHECK(found({"V_RRM>=60V"}) == 1);
    CHECK(found({"V_RRM>=61V"}) == 0);
    CHECK(found({"family:switch"}) == 1);
    CHECK(found({"place:Hut", "V_DSS>=50V"}) == 1);
    CHECK(found({"place:Hut", "schottky"}) == 0);
    const Answer none = folder.run({"bin", "find", "nothing of the kind"});
    CHECK(none.status == 1);
    CHECK(none.out.empty());
}

TEST_CASE("commands that only read make no bin and change none", "[app][bin]") {
    const Folder folder;
    folder.write("gauge.toml", source_file("app/demo/tide-gauge.toml"));
    const std::vector<std::vector<std::string>> reading = {
        {"bin", "list"}, {"bin", "list", "--types"}, {"bin", "find", "x"}, {"bin", "show", "1"}, {"bin", "history"}, {"check", "gauge.toml"}, {"rank", "gauge.toml", "switch"},
        {"stress", "gauge.toml", "--at", "input_voltage=12V"}, {"rulebook", "list"}, {"rulebook", "show"}, {"help", "figures"}, {"new", "buck"}};
    const std::vector<std::string> before = folder.files();
    for (const auto& call : reading) (void)folder.run(call);
    CHECK(folder.files() == before);
    REQUIRE(folder.run(kRectifier).status == 0);
    const std::string bin = folder.read(kBin);
    const std::vector<std::string> with_bin = folder.files();
    for (const auto& call : reading) (void)folder.run(call);
    CHECK(folder.read(kBin) == bin);
    CHECK(folder.files() == with_bin);
}

TEST_CASE("a file that is no bin, and one that cannot be opened, end in 4", "[app][bin]") {
    const Folder folder;
    folder.write("letter.txt", std::string(5000, 'x'));
    const Answer answer = folder.run({"bin", "list", "--bin", "letter.txt"});
    CHECK(answer.status == 4);
    CHECK(answer.err.find("letter.txt") != std::string::npos);
    CHECK(folder.read("letter.txt") == std::string(5000, 'x'));
    CHECK(folder.run({"bin", "add", "switch", "s", "--bin", "letter.txt"}).status == 4);
    CHECK(folder.read("letter.txt") == std::string(5000, 'x'));
    CHECK(folder.run({"bin", "list", "--json", "--bin", "letter.txt"}).errors().size() == 1);
}

TEST_CASE("the demo's lots go into a new bin on disk, and into no other", "[app][bin]") {
    const Folder folder;
    CHECK(folder.run({"--bin", "trial.binwright", "bin", "demo"}).status == 0);
    const json lots = folder.run({"--bin", "trial.binwright", "bin", "list", "--json"}).json().at("lots");
    CHECK(lots.size() >= 40);
    CHECK(lots == folder.run({"--bin", "demo", "bin", "list", "--json"}).json().at("lots"));
    CHECK(folder.run({"--bin", "trial.binwright", "bin", "demo"}).status == 2);
    const Answer kept = folder.run({"--bin", "demo", "bin", "take", "1"});
    CHECK(kept.status == 2);
    CHECK(kept.err == "the demo bin is in memory: no change to it would remain; `binwright --bin trial.binwright bin demo` makes one on disk to try things in\n");
}

TEST_CASE("the bin stands in the data folder where nothing else is said", "[app][bin]") {
    Folder folder;
    folder.environment.erase("BINWRIGHT_BIN");
    REQUIRE(folder.run(kRectifier).status == 0);
    bool there = false;
    for (const auto& entry : std::filesystem::recursive_directory_iterator(folder.path("data"))) there = there || entry.is_regular_file();
    CHECK(there);
    CHECK(folder.run({"bin", "list", "--json"}).json().at("lots").size() == 1);
}
