// SPDX-License-Identifier: GPL-3.0-or-later
// What a converter file means, and what is said of one that is broken.
#include <catch2/catch.hpp>
#include <filesystem>
#include <fstream>
#include <map>
#include <random>
#include <set>
#include <sstream>

#include "engine/converter/converter.hpp"

using namespace binwright;
namespace fs = std::filesystem;

namespace {

const fs::path kSource = BINWRIGHT_SOURCE;

std::string contents(const fs::path& file) {
    std::ifstream stream(file, std::ios::binary);
    std::stringstream text;
    text << stream.rdbuf();
    return text.str();
}

// What is said of a text, one line a fault.
std::vector<std::string> said(const std::string& text, const std::string& file,
                              const std::vector<std::string>& changes = {}) {
    std::vector<std::string> out;
    try {
        (void)read_converter(text, file, changes);
    } catch (const InputError& error) {
        for (const Fault& fault : error.faults) out.push_back(to_string(fault));
    }
    return out;
}

const std::string kPlain = R"(topology = "sepic"
[operating]
input_voltage  = ["10.5 V", "15 V"]
output_voltage = ["9 V", "15 V"]
output_current = ["0.1 A", "2.5 A"]
frequency      = "100 kHz"
ambient        = ["-10 °C", "45 °C"]
)";

// Every key that a converter file may hold, each with a value that its neighbours do not have.
const std::string kEverything = R"(kind = "converter"
format = 1
title = "Everything"
topology = "sepic"
[operating]
input_voltage = ["10.5 V", "15 V"]
output_voltage = ["9 V", "15 V"]
output_current = "0.1 A .. 2.5 A"
frequency = "100 kHz"
ambient = ["-10 °C", "45 °C"]
load = "power"
output_tolerance = "3 %"
output_ripple = "150 mV"
life = "20000 h"
[operating.typical]
input_voltage = "12.5 V"
ambient = "20 °C"
[source]
resistance = "30 mΩ"
inductance = "1 µH"
surge = "24 V"
switched = false
[winding]
leakage = ["0.4 µH", "0.6 µH"]
turns_ratio = 1.25
[winding.primary]
inductance = "33 µH"
tolerance = "10 %"
resistance = "12 mΩ"
saturation_current = "20 A"
saturation_drop = "30 %"
core = "powder"
turns = 18
wire_diameter = "1.5 mm"
core_loss = "1.2 W"
core_area = "65 mm2"
core_volume = "4100 mm3"
steinmetz = [2.5, 1.4, 2.3]
[winding.secondary]
inductance = "47 µH"
[drive]
voltage = ["11 V", "13 V"]
resistance = "10 Ω"
maximum_duty = "95 %"
minimum_on_time = "400 ns"
sense_threshold = ["0.9 V", "1.1 V"]
sense_resistance = "68 mΩ"
sense_power = "5 W"
slope_compensation = "0.30 A/us"
short_circuit = "hiccup"
blanking = "0.3 us"
delay = "0.2 us"
undervoltage_lockout = "9 V"
[feedback]
reference = "2.5 V"
upper = "47 kΩ"
lower = "10 kΩ"
trimmer = "22 kΩ"
[fuse]
rating = "10 A"
melting = "60 A2s"
[clamp]
voltage = "80 V"
power = "2 W"
[heatsink.small]
resistance = "12 K/W"
[enclosure]
resistance = "1.5 K/W"
[seat.switch]
reference = "Q1"
fitted = "417-H"
count = 2
heatsink = "small"
interface = "1.2 K/W"
overshoot = "4 V @ 9.5 A"
[seat.output_capacitor]
fitted = [{ lot = "203-C", count = 2 }, { lot = "118-K" }]
warmer_by = "10 K"
charged_by = "low impedance"
[seat.rectifier]
count = 3
[seat.rectifier.figures]
technology = "schottky"
"V_RRM" = "60 V"
"V_F" = ["0.62 V max @ 15 A, 25 °C", "0.55 V max @ 15 A, 125 °C"]
[seat.coupling_capacitor.element]
capacitance = "100 µF"
resistance = "20 mΩ"
[seat.input_capacitor]
reference = "C1"
[seat.input_capacitor.as_fitted]
lot = "88-B"
part = "Aluminium 25 V 1000 µF"
origin = "pulled"
technology = "aluminium"
[seat.input_capacitor.as_fitted.marked]
"U_R" = "25 V"
[seat.input_capacitor.as_fitted.measured]
"ESR" = "41 mΩ @ 100 kHz"
[[across]]
name = "load board filter"
between = "output"
"U_R" = "25 V"
[[across]]
name = "snubber"
between = "switch"
"U_R" = "100 V"
)";

}  // namespace

TEST_CASE("every key of a converter file goes where it belongs, in base units", "[engine][converter]") {
    const Converter c = read_converter(kEverything, "everything.toml");
    CHECK(c.file == "everything.toml");
    CHECK(c.title == "Everything");
    REQUIRE(c.topology);
    CHECK(c.topology->name == "sepic");
    const auto& o = c.operating;
    CHECK(o.input_voltage.lowest == Approx(10.5));
    CHECK(o.input_voltage.highest == Approx(15));
    CHECK(o.output_voltage.lowest == Approx(9));
    CHECK(o.output_current.lowest == Approx(0.1));
    CHECK(o.output_current.highest == Approx(2.5));
    CHECK(o.frequency.single());
    CHECK(o.frequency.lowest == Approx(1e5));
    CHECK(o.ambient.lowest == Approx(263.15));
    CHECK(o.ambient.highest == Approx(318.15));
    CHECK(o.load == LoadKind::power);
    CHECK(o.output_tolerance.value() == Approx(0.03));
    CHECK(o.output_ripple.value() == Approx(0.15));
    CHECK(o.life.value() == Approx(7.2e7));
    REQUIRE(o.typical);
    CHECK(o.typical->input_voltage == Approx(12.5));
    CHECK(o.typical->ambient == Approx(293.15));
    CHECK(o.typical->output_voltage == Approx(12));  // not given: the middle
    CHECK(o.typical->output_current == Approx(1.3));
    CHECK(typical_point(c).input_voltage == Approx(12.5));
    REQUIRE(c.source);
    CHECK(c.source->resistance == Approx(0.03));
    CHECK(c.source->inductance == Approx(1e-6));
    CHECK(c.source->surge.value() == Approx(24));
    CHECK_FALSE(c.source->switched);
    const auto& w = c.winding;
    CHECK_FALSE(w.coupling);
    CHECK(w.leakage.value().lowest == Approx(4e-7));
    CHECK(w.leakage.value().highest == Approx(6e-7));
    CHECK(w.turns_ratio == Approx(1.25));
    REQUIRE(w.primary);
    CHECK(w.primary->inductance == Approx(33e-6));
    CHECK(w.primary->tolerance.value() == Approx(0.1));
    CHECK(w.primary->resistance == Approx(0.012));
    CHECK(w.primary->saturation_current.value() == Approx(20));
    CHECK(w.primary->saturation_drop.value() == Approx(0.3));
    CHECK(w.primary->core == "powder");
    CHECK(w.primary->turns.value() == Approx(18));
    CHECK(w.primary->wire_diameter.value() == Approx(1.5e-3));
    CHECK(w.primary->core_loss.value() == Approx(1.2));
    CHECK(w.primary->core_area.value() == Approx(65e-6));
    CHECK(w.primary->core_volume.value() == Approx(4.1e-6));
    CHECK(w.primary->steinmetz == std::vector<double>{2.5, 1.4, 2.3});
    REQUIRE(w.secondary);
    CHECK(w.secondary->inductance == Approx(47e-6));
    CHECK(w.secondary->resistance == Approx(0.012));  // not given: as the primary
    const auto& d = c.drive;
    CHECK(d.voltage.value().lowest == Approx(11));
    CHECK(d.voltage.value().highest == Approx(13));
    CHECK(d.resistance.value() == Approx(10));
    CHECK(d.maximum_duty.value() == Approx(0.95));
    CHECK(d.minimum_on_time.value() == Approx(4e-7));
    CHECK(d.sense_threshold.value().highest == Approx(1.1));
    CHECK(d.sense_resistance.value() == Approx(0.068));
    CHECK(d.sense_power.value() == Approx(5));
    CHECK(d.slope_compensation.value() == Approx(3e5));
    CHECK(d.short_circuit == "hiccup");
    CHECK(d.blanking.value() == Approx(3e-7));
    CHECK(d.delay.value() == Approx(2e-7));
    CHECK(d.undervoltage_lockout.value() == Approx(9));
    CHECK(c.feedback.reference.value() == Approx(2.5));
    CHECK(c.feedback.upper.value() == Approx(47e3));
    CHECK(c.feedback.lower.value() == Approx(10e3));
    CHECK(c.feedback.trimmer.value() == Approx(22e3));
    CHECK(c.fuse.rating.value() == Approx(10));
    CHECK(c.fuse.melting.value() == Approx(60));
    CHECK(c.clamp.voltage.value() == Approx(80));
    CHECK(c.clamp.power.value() == Approx(2));
    CHECK(c.heatsinks.at("small") == Approx(12));
    CHECK(c.enclosure.value() == Approx(1.5));

    const SeatConfig& q = c.seat(Seat::switch_);
    CHECK(c.reference(Seat::switch_) == "Q1");
    CHECK(c.reference(Seat::rectifier) == "rectifier");
    REQUIRE(q.fitted.size() == 1);
    CHECK(q.fitted[0].lot == "417-H");
    CHECK(q.fitted[0].count == 2);
    CHECK(q.fitted[0].place.line > 0);
    CHECK(q.heatsink == "small");
    CHECK(q.interface_resistance.value() == Approx(1.2));
    CHECK(q.overshoot.value().voltage == Approx(4));
    CHECK(q.overshoot.value().at_current.value() == Approx(9.5));
    const SeatConfig& out = c.seat(Seat::output_capacitor);
    REQUIRE(out.fitted.size() == 2);
    CHECK(out.fitted[0].count == 2);
    CHECK(out.fitted[1].lot == "118-K");
    CHECK(out.fitted[1].count == 1);
    CHECK(out.warmer_by == Approx(10));
    CHECK(out.charged_by == "low impedance");
    const SeatConfig& r = c.seat(Seat::rectifier);
    CHECK(r.count == 3);
    CHECK(r.attributes.at("technology") == "schottky");
    REQUIRE(r.figures.size() == 3);
    CHECK(r.figures[0].symbol == Symbol::V_RRM);
    CHECK(r.figures[0].value.worst == Approx(60));
    CHECK(r.figures[0].known == Known::told);
    CHECK(r.figures[2].at.temperature.value() == Approx(398.15));
    const SeatConfig& cs = c.seat(Seat::coupling_capacitor);
    REQUIRE(cs.element);
    CHECK(cs.element->capacitance.value() == Approx(1e-4));
    CHECK(cs.element->resistance.value() == Approx(0.02));
    CHECK_FALSE(cs.element->drop);
    const SeatConfig& in = c.seat(Seat::input_capacitor);
    REQUIRE(in.as_fitted.size() == 1);
    CHECK(in.as_fitted[0].label == "88-B");
    CHECK(in.as_fitted[0].origin == Origin::pulled);
    REQUIRE(in.as_fitted[0].part.figures.size() == 2);
    CHECK(in.as_fitted[0].part.figures[0].known == Known::marked);
    CHECK(in.as_fitted[0].part.figures[1].known == Known::measured);
    REQUIRE(c.across.size() == 2);
    CHECK(c.across[0].name == "load board filter");
    CHECK(c.across[1].between == "switch");
    REQUIRE(c.across[1].figures.size() == 1);
    CHECK(c.across[1].figures[0].value.worst == Approx(100));
}

TEST_CASE("what a file leaves out stays out", "[engine][converter]") {
    const Converter c = read_converter(kPlain, "plain.toml");
    CHECK_FALSE(c.source);
    CHECK_FALSE(c.winding.primary);
    CHECK_FALSE(c.winding.coupling);
    CHECK_FALSE(c.drive.voltage);
    CHECK_FALSE(c.enclosure);
    CHECK_FALSE(c.operating.typical);
    CHECK(c.seats.empty());
    CHECK(c.heatsinks.empty());
    CHECK(c.seat(Seat::switch_).fitted.empty());
    CHECK(typical_point(c).input_voltage == Approx(12.75));
    CHECK(typical_point(c).ambient == Approx(290.65));
}

TEST_CASE("the listing, the reading and the hints know the same keys", "[engine][converter]") {
    std::set<std::string> seen;
    for (const ConverterKey& key : converter_keys()) {
        const std::string listed = key.table.empty() ? key.key : key.table + "." + key.key;
        INFO(listed);
        CHECK_FALSE(key.takes.empty());
        CHECK_FALSE(key.meaning.empty());
        CHECK(seen.insert(listed).second);
        if (key.table == "across[]") continue;
        // The key with one letter too many is refused, and the hint names the key itself.
        std::string dotted = listed;
        if (const auto star = dotted.find('*'); star != std::string::npos)
            dotted.replace(star, 1,
                           !key.table.starts_with("seat")                        ? "small"
                           : key.key == "capacitance" || key.key == "charged_by" ? "output_capacitor"
                                                                                 : "rectifier");
        const std::string text = kPlain + "[heatsink.small]\nresistance = \"12 K/W\"\n";
        const auto faults = said(text, "x.toml", {dotted + "q=1"});
        REQUIRE(faults.size() == 1);
        CHECK(faults[0] == "--with: unknown key `" + dotted + "q`; did you mean `" + dotted + "`?");
    }
    CHECK(seen.size() > 80);
    CHECK(seen.contains("drive.slope_compensation"));
    CHECK(seen.contains("seat.*.element.capacitance"));
}

TEST_CASE("broken converter files are refused word for word", "[engine][converter][broken]") {
    std::map<std::string, std::vector<std::string>> expected;
    std::ifstream table(kSource / "tests/broken/converter-messages.txt");
    REQUIRE(table);
    for (std::string line; std::getline(table, line);)
        if (!line.empty() && line[0] != '#') expected[line.substr(0, line.find(':'))].push_back(line);
    std::size_t files = 0;
    for (const auto& entry : fs::directory_iterator(kSource / "tests/broken")) {
        const std::string name = entry.path().filename().string();
        if (!name.starts_with("converter-") || entry.path().extension() != ".toml") continue;
        ++files;
        INFO(name);
        const auto messages = said(contents(entry.path()), name);
        CHECK(messages.size() == expected[name].size());
        CHECK_FALSE(messages.empty());
        for (std::size_t k = 0; k < std::min(messages.size(), expected[name].size()); ++k) {
            const std::string& wanted = expected[name][k];
            const std::string open = "…";  // a quantity's own sentence follows
            if (wanted.ends_with(open)) {
                const std::string front = wanted.substr(0, wanted.size() - open.size());
                CHECK(messages[k].substr(0, front.size()) == front);
                CHECK(messages[k].size() > front.size());
            } else {
                CHECK(messages[k] == wanted);
            }
        }
    }
    CHECK(files == expected.size());
    CHECK(files >= 70);
}

TEST_CASE("ten faults in one file are all reported, each with its place", "[engine][converter][broken]") {
    try {
        (void)read_converter(contents(kSource / "tests/broken/converter-ten-faults.toml"), "ten.toml");
        FAIL("it was accepted");
    } catch (const InputError& error) {
        CHECK(error.faults.size() >= 10);
        for (const Fault& fault : error.faults) {
            INFO(to_string(fault));
            CHECK(fault.place.file == "ten.toml");
            CHECK(fault.place.line > 0);
            CHECK(fault.place.column > 0);
            CHECK_FALSE(fault.field.empty());
        }
    }
}

TEST_CASE("several lines that are no TOML are reported together with the rest", "[engine][converter][broken]") {
    const auto faults = said(
        "topology = \"sepic\"\n[operating]\nfrequency = 100 kHz\nlife = \"20000 h\nambent = \"45 °C\"\n", "x.toml");
    REQUIRE(faults.size() == 3);
    CHECK(faults[0] == "x.toml:3:17: the value of `frequency` stands in quotes: frequency = \"100 kHz\"");
    CHECK(faults[1] == "x.toml:4:16: the text that `life` begins has no closing quote");
    CHECK(faults[2] == "x.toml:5:1: unknown key `ambent` in [operating]; did you mean `ambient`?");
}

TEST_CASE("columns count characters, not bytes", "[engine][converter][broken]") {
    const auto faults = said(
        kPlain + "[fuse]\n\"größe µ\" = \"10 A\"\n[source]\nresistance = \"30 mΩ\" # µµ\nswitched = 1\n", "x.toml");
    REQUIRE(faults.size() == 2);
    CHECK(faults[0].starts_with("x.toml:9:1: unknown key `größe µ` in [fuse]"));
    CHECK(faults[1].starts_with("x.toml:12:12: `switched`"));
}

TEST_CASE("a byte order mark and the line ends of another system do not matter", "[engine][converter]") {
    std::string text = "\xEF\xBB\xBF";
    for (const char c : kPlain) text += c == '\n' ? "\r\n" : std::string(1, c);
    CHECK(read_converter(text, "x.toml").operating.frequency.lowest == Approx(1e5));
}

TEST_CASE("a changed copy of the file is read, refused or accepted, and nothing worse", "[engine][converter][broken]") {
    // Random damage to the demo: bytes changed, lines doubled, dropped and swapped. Any other exception ends the test.
    const std::string whole = contents(kSource / "app/demo/tide-gauge.toml");
    REQUIRE(whole.size() > 1000);
    std::mt19937 random(20260917);
    const std::string letters = "\"'[]{}=.,#\n\\ \t-0123456789abVΩµ_\x80\xff";
    int accepted = 0, refused = 0;
    for (int round = 0; round < 2000; ++round) {
        std::string text = whole;
        const int changes = 1 + static_cast<int>(random() % 4);
        for (int k = 0; k < changes && !text.empty(); ++k) {
            const std::size_t at = random() % text.size();
            switch (random() % 5) {
                case 0:
                    text[at] = letters[random() % letters.size()];
                    break;
                case 1:
                    text.erase(at, 1 + random() % 20);
                    break;
                case 2:
                    text.insert(at, 1, letters[random() % letters.size()]);
                    break;
                case 3:
                    text.insert(at, text.substr(random() % text.size(), random() % 60));
                    break;
                default:
                    text.resize(at);
                    break;
            }
        }
        try {
            (void)read_converter(text, "damaged.toml");
            ++accepted;
        } catch (const InputError& error) {
            ++refused;
            CHECK_FALSE(error.faults.empty());
        }
    }
    CHECK(accepted > 60);  // damage to comments
    CHECK(refused > 1000);
}

TEST_CASE("the demo converters are sound", "[engine][converter]") {
    for (const char* name : {"tide-gauge", "tide-gauge-22", "lantern", "bilge-alarm"}) {
        const std::string file = std::string("app/demo/") + name + ".toml";
        INFO(file);
        CHECK(said(contents(kSource / file), file) == std::vector<std::string>{});
    }
}
