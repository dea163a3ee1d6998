// SPDX-License-Identifier: GPL-3.0-or-later
#include "engine/converter/keys.hpp"

#include <algorithm>

#include "engine/converter/item.hpp"

namespace binwright {
namespace {

template <class T>
T& made(std::optional<T>& value) {
    if (!value) value.emplace();
    return *value;
}
ElementConfig& element(Converter& c, const Where& w) {
    return made(c.seats[w.seat].element);
}
WindingConfig& primary(Converter& c) {
    return made(c.winding.primary);
}
WindingConfig& secondary(Converter& c) {
    return made(c.winding.secondary);
}

#define TO(place) [](Converter& c, [[maybe_unused]] const Where& w) -> Slot { return &(place); }

constexpr double kCold = kCelsiusZero - 100, kHot = kCelsiusZero + 200;  // ambient of anything these parts are made for
constexpr auto Q = Takes::quantity, R = Takes::range;
constexpr unsigned any = kAnyFamily;

// Bounds keep out slips of prefix and sign, not bad designs: a value within them may still hold nothing.
// table, key, takes, unit, lowest, highest, lowest itself is out, words, needed, families, meaning, where it goes
// One key a line.
// clang-format off
const std::vector<Key> kKeys = {
    {"", "kind", Takes::special, Unit::none, 0, 0, false, "converter", false, any, "what the file is", nullptr},
    {"", "format", Takes::special, Unit::none, 1, 1, false, "", false, any, "version of these keys", nullptr},
    {"", "title", Takes::text, Unit::none, 0, 0, false, "", false, any, "name for people", TO(c.title)},
    {"", "topology", Takes::special, Unit::none, 0, 0, false, "", true, any, "which converter it is", nullptr},

    {"operating", "input_voltage", R, Unit::volt, 0, 2000, true, "", true, any, "input voltage, range", TO(c.operating.input_voltage)},
    {"operating", "output_voltage", R, Unit::volt, 0, 5000, true, "", true, any, "output voltage, magnitude, range", TO(c.operating.output_voltage)},
    {"operating", "output_current", R, Unit::ampere, 0, 1000, false, "", true, any, "output current, range", TO(c.operating.output_current)},
    {"operating", "frequency", R, Unit::hertz, 1e3, 5e6, false, "", true, any, "switching frequency", TO(c.operating.frequency)},
    {"operating", "ambient", R, Unit::celsius, kCold, kHot, false, "", true, any, "ambient temperature, range", TO(c.operating.ambient)},
    {"operating", "load", Takes::word, Unit::none, 0, 0, false, "current|resistance|power", false, any, "how the load draws", TO(c.operating.load)},
    {"operating", "output_tolerance", Q, Unit::fraction, 0, 0.5, false, "", false, any, "tolerance of the set-point", TO(c.operating.output_tolerance)},
    {"operating", "output_ripple", Q, Unit::volt, 0, 1000, true, "", false, any, "ripple allowed, peak to peak", TO(c.operating.output_ripple)},
    {"operating", "life", Q, Unit::second, 3600, 3.2e9, false, "", false, any, "life wanted", TO(c.operating.life)},
    {"operating.typical", "input_voltage", Q, Unit::volt, 0, 2000, true, "", false, any, "typical input voltage", TO(made(c.operating.typical).input_voltage)},
    {"operating.typical", "output_voltage", Q, Unit::volt, 0, 5000, true, "", false, any, "typical output voltage", TO(made(c.operating.typical).output_voltage)},
    {"operating.typical", "output_current", Q, Unit::ampere, 0, 1000, false, "", false, any, "typical output current", TO(made(c.operating.typical).output_current)},
    {"operating.typical", "frequency", Q, Unit::hertz, 1e3, 5e6, false, "", false, any, "typical frequency", TO(made(c.operating.typical).frequency)},
    {"operating.typical", "ambient", Q, Unit::celsius, kCold, kHot, false, "", false, any, "typical ambient temperature", TO(made(c.operating.typical).ambient)},

    {"source", "resistance", Q, Unit::ohm, 0, 1e4, false, "", false, any, "of battery, lead and fuse", TO(made(c.source).resistance)},
    {"source", "inductance", Q, Unit::henry, 0, 0.1, false, "", false, any, "of the lead", TO(made(c.source).inductance)},
    {"source", "surge", Q, Unit::volt, 0, 5000, true, "", false, any, "highest transient input voltage", TO(made(c.source).surge)},
    {"source", "switched", Takes::flag, Unit::none, 0, 0, false, "", false, any, "the input is connected hot", TO(made(c.source).switched)},

    {"winding", "coupling", R, Unit::none, 0, 0.999, false, "", false, any, "of the two windings, 0 = separate chokes", TO(c.winding.coupling)},
    {"winding", "leakage", R, Unit::henry, 0, 1, true, "", false, any, "primary side, secondary shorted", TO(c.winding.leakage)},
    {"winding", "turns_ratio", Q, Unit::none, 1e-3, 1e3, false, "", false, any, "N_secondary / N_primary", TO(c.winding.turns_ratio)},
#define WINDING(table, w_) \
    {table, "inductance", Q, Unit::henry, 1e-9, 10, false, "", false, any, "of this winding (flyback: magnetising)", TO(w_(c).inductance)}, \
    {table, "tolerance", Q, Unit::fraction, 0, 0.9, false, "", false, any, "of the inductance", TO(w_(c).tolerance)}, \
    {table, "resistance", Q, Unit::ohm, 0, 1e4, false, "", false, any, "of the copper", TO(w_(c).resistance)}, \
    {table, "saturation_current", Q, Unit::ampere, 0, 1e4, true, "", false, any, "of this winding alone", TO(w_(c).saturation_current)}, \
    {table, "saturation_drop", Q, Unit::fraction, 0, 0.95, true, "", false, any, "by which the inductance is down there", TO(w_(c).saturation_drop)}, \
    {table, "core", Takes::word, Unit::none, 0, 0, false, "ferrite|powder|other", false, any, "kind of core", TO(w_(c).core)}, \
    {table, "turns", Q, Unit::none, 0, 1e5, true, "", false, any, "number of turns", TO(w_(c).turns)}, \
    {table, "wire_diameter", Q, Unit::metre, 1e-5, 0.05, false, "", false, any, "of the copper", TO(w_(c).wire_diameter)}, \
    {table, "core_loss", Q, Unit::watt, 0, 1e4, false, "", false, any, "at the worst point of the range", TO(w_(c).core_loss)}, \
    {table, "core_area", Q, Unit::metre2, 1e-8, 0.1, false, "", false, any, "magnetic cross-section", TO(w_(c).core_area)}, \
    {table, "core_volume", Q, Unit::metre3, 1e-11, 0.1, false, "", false, any, "magnetic volume", TO(w_(c).core_volume)}, \
    {table, "steinmetz", Takes::numbers, Unit::none, 0, 1e12, true, "", false, any, "k, alpha, beta of the core's loss", TO(w_(c).steinmetz)}
    WINDING("winding.primary", primary),
    WINDING("winding.secondary", secondary),
#undef WINDING

    {"drive", "voltage", R, Unit::volt, 0, 60, true, "", false, any, "gate drive", TO(c.drive.voltage)},
    {"drive", "resistance", Q, Unit::ohm, 0, 1e4, false, "", false, any, "gate resistor with the driver's own", TO(c.drive.resistance)},
    {"drive", "maximum_duty", Q, Unit::fraction, 0, 1, true, "", false, any, "longest on-time as a share of the period", TO(c.drive.maximum_duty)},
    {"drive", "minimum_on_time", Q, Unit::second, 0, 1e-3, false, "", false, any, "shortest on-time", TO(c.drive.minimum_on_time)},
    {"drive", "sense_threshold", R, Unit::volt, 0, 10, true, "", false, any, "of the peak-current comparator", TO(c.drive.sense_threshold)},
    {"drive", "sense_resistance", Q, Unit::ohm, 0, 1e3, false, "", false, any, "in series with the switch", TO(c.drive.sense_resistance)},
    {"drive", "sense_power", Q, Unit::watt, 0, 1e3, true, "", false, any, "rating of the sense resistor", TO(c.drive.sense_power)},
    {"drive", "slope_compensation", Q, Unit::ampere_per_second, 0, 1e10, false, "", false, any, "as current at the sense resistor", TO(c.drive.slope_compensation)},
    {"drive", "short_circuit", Takes::word, Unit::none, 0, 0, false, "limit|hiccup|latch", false, any, "what the controller does at a shorted output", TO(c.drive.short_circuit)},
    {"drive", "blanking", Q, Unit::second, 0, 1e-3, false, "", false, any, "during which the comparator is blind", TO(c.drive.blanking)},
    {"drive", "delay", Q, Unit::second, 0, 1e-3, false, "", false, any, "from comparator to switch", TO(c.drive.delay)},
    {"drive", "undervoltage_lockout", Q, Unit::volt, 0, 2000, true, "", false, any, "input below which it stops", TO(c.drive.undervoltage_lockout)},

    {"feedback", "reference", Q, Unit::volt, 0, 100, true, "", false, any, "of the regulator", TO(c.feedback.reference)},
    {"feedback", "upper", Q, Unit::ohm, 0, 1e8, true, "", false, any, "divider, output side", TO(c.feedback.upper)},
    {"feedback", "lower", Q, Unit::ohm, 0, 1e8, true, "", false, any, "divider, ground side", TO(c.feedback.lower)},
    {"feedback", "trimmer", Q, Unit::ohm, 0, 1e8, true, "", false, any, "in series with lower", TO(c.feedback.trimmer)},
    {"fuse", "rating", Q, Unit::ampere, 0, 1e3, true, "", false, any, "rated current", TO(c.fuse.rating)},
    {"fuse", "melting", Q, Unit::ampere2_second, 0, 1e7, true, "", false, any, "I²t", TO(c.fuse.melting)},
    {"clamp", "voltage", Q, Unit::volt, 0, 5000, true, "", false, any, "across the switch, at which it acts", TO(c.clamp.voltage)},
    {"clamp", "power", Q, Unit::watt, 0, 1e3, true, "", false, any, "what it can take", TO(c.clamp.power)},
    {"heatsink.*", "resistance", Q, Unit::kelvin_per_watt, 0, 1e3, true, "", true, any, "to the air inside", TO(c.heatsinks[w.name])},
    {"enclosure", "resistance", Q, Unit::kelvin_per_watt, 0, 1e3, false, "", true, any, "inner air to ambient", TO(c.enclosure)},

    {"seat.*", "reference", Takes::text, Unit::none, 0, 0, false, "", false, any, "on the drawing, such as Q1", TO(c.seats[w.seat].reference)},
    {"seat.*", "fitted", Takes::special, Unit::none, 0, 0, false, "", false, any, "a lot label or part name, or a list of { lot, count }", nullptr},
    {"seat.*", "count", Takes::whole, Unit::none, 1, 1000, false, "", false, any, "in parallel", TO(c.seats[w.seat].count)},
    {"seat.*", "heatsink", Takes::text, Unit::none, 0, 0, false, "", false, kSwitch | kRectifier, "name of a [heatsink.x]", TO(c.seats[w.seat].heatsink)},
    {"seat.*", "interface", Q, Unit::kelvin_per_watt, 0, 1e3, false, "", false, kSwitch | kRectifier, "case to sink: pad, washer, grease", TO(c.seats[w.seat].interface_resistance)},
    {"seat.*", "overshoot", Takes::special, Unit::volt, 0, 5000, false, "", false, kSwitch | kRectifier, "measured, such as 4 V @ 9.5 A", nullptr},
    {"seat.*", "warmer_by", Q, Unit::kelvin, 0, 150, false, "", false, any, "air near this part above the inner air", TO(c.seats[w.seat].warmer_by)},
    {"seat.*", "charged_by", Takes::text, Unit::none, 0, 0, false, "", false, kCapacitor, "what charges it, such as low impedance", TO(c.seats[w.seat].charged_by)},
    {"seat.*.element", "resistance", Q, Unit::ohm, 0, 1e6, false, "", false, any, "on-state, slope or ESR", TO(element(c, w).resistance)},
    {"seat.*.element", "drop", Q, Unit::volt, 0, 100, false, "", false, kRectifier, "threshold of the rectifier", TO(element(c, w).drop)},
    {"seat.*.element", "capacitance", Q, Unit::farad, 1e-12, 10, false, "", false, kCapacitor, "of the whole bank", TO(element(c, w).capacitance)},

    {"across[]", "name", Takes::text, Unit::none, 0, 0, false, "", true, any, "what it is", TO(c.across[w.index].name)},
    {"across[]", "between", Takes::word, Unit::none, 0, 0, false, "input|output|switch|rectifier|coupling", true, any, "the voltage it sits on", TO(c.across[w.index].between)},
};
// clang-format on
#undef TO

const std::vector<AttributeInfo> kAttributes = {
    {"technology", kSwitch, "", "such as silicon"},
    {"technology", kRectifier, "schottky|ultrafast|fast|standard", "kind of junction"},
    {"technology", kCapacitor, "aluminium|polymer|hybrid|tantalum|tantalum polymer|ceramic 1|ceramic 2|film",
     "kind of dielectric"},
    {"polarity", kSwitch, "", "N or P"},
    {"pins", kSwitch | kRectifier, "", "order of the pins"},
    {"tab", kSwitch | kRectifier, "", "what the tab is connected to"},
    {"package", kAnyFamily, "", "such as TO-220"},
    {"arrangement", kRectifier, "single|common cathode|common anode|series", "of the legs"},
    {"legs_used", kRectifier, "1|2", "legs in use"},
    {"characteristic", kCapacitor, "", "temperature characteristic, such as X7R"},
    {"can", kCapacitor, "", "diameter x length, such as 10x20 mm"},
};

bool table_fits(std::string_view pattern, const std::vector<std::string>& parts, std::size_t count) {
    std::size_t k = 0;
    std::string_view rest = pattern;
    while (!rest.empty()) {
        const auto dot = std::min(rest.find('.'), rest.size());
        if (k >= count || (rest.substr(0, dot) != "*" && rest.substr(0, dot) != parts[k])) return false;
        ++k;
        rest.remove_prefix(std::min(dot + 1, rest.size()));
    }
    return k == count;
}

// Every dotted key that can be reached, for the hint.
std::vector<std::string> all_keys(const std::vector<std::string>& heatsinks) {
    std::vector<std::string> out;
    for (const Key& key : kKeys) {
        if (key.table == "across[]") continue;
        std::vector<std::string> tables{std::string(key.table)};
        if (key.table == "heatsink.*") {
            tables.clear();
            for (const auto& name : heatsinks) tables.push_back("heatsink." + name);
        } else if (key.table.starts_with("seat.*")) {
            tables.clear();
            for (const Seat seat : kSeats)
                if (key.families & bit(family_of(seat)))
                    tables.push_back("seat." + std::string(to_string(seat)) + std::string(key.table.substr(6)));
        }
        for (const auto& table : tables)
            out.push_back(table.empty() ? std::string(key.key) : table + "." + std::string(key.key));
        if (key.table == "operating") out.emplace_back(key.key);
    }
    for (const Seat seat : kSeats)
        for (const SymbolInfo& symbol : symbols())
            if (find_symbol(symbol.name, family_of(seat)))
                out.push_back("seat." + std::string(to_string(seat)) + ".figures." + std::string(symbol.name));
    return out;
}

}  // namespace

std::span<const Key> keys() {
    return kKeys;
}
std::span<const AttributeInfo> attributes() {
    return kAttributes;
}

Family family_of(Seat seat) {
    if (seat == Seat::switch_) return Family::switch_;
    return seat == Seat::rectifier ? Family::rectifier : Family::capacitor;
}

unsigned bit(Family family) {
    return family == Family::switch_ ? kSwitch : family == Family::rectifier ? kRectifier : kCapacitor;
}

std::vector<std::string> split_words(std::string_view words) {
    std::vector<std::string> out;
    while (!words.empty()) {
        const auto bar = std::min(words.find('|'), words.size());
        out.emplace_back(words.substr(0, bar));
        words.remove_prefix(std::min(bar + 1, words.size()));
    }
    return out;
}

KeyPath find_key(std::string_view dotted, const Place& place, const std::vector<std::string>& heatsinks) {
    KeyPath path;
    path.parts = split_key(dotted);
    auto& parts = path.parts;
    if (parts.size() == 1)
        for (const Key& key : kKeys)
            if (key.table == "operating" && key.key == parts[0]) {
                parts.insert(parts.begin(), "operating");
                break;
            }
    std::optional<Seat> seat;
    if (parts.size() >= 3 && parts[0] == "seat") seat = find_seat(parts[1]);
    if (!parts.empty() && (parts[0] != "seat" || seat)) {
        for (const Key& key : kKeys)
            if (table_fits(key.table, parts, parts.size() - 1) && key.key == parts.back() &&
                (!seat || (key.families & bit(family_of(*seat)))))
                path.key = &key;
    }
    if (seat && parts.size() == 4 && parts[2] == "figures") {
        path.symbol = find_symbol(parts[3], family_of(*seat));
        for (const AttributeInfo& info : kAttributes)
            if (info.name == parts[3] && (info.families & bit(family_of(*seat)))) path.attribute = &info;
    }
    if (path.key || path.symbol || path.attribute) return path;

    Fault fault{place, std::string(dotted), "unknown key `" + std::string(dotted) + "`", ""};
    const std::string near = nearest_word(dotted, all_keys(heatsinks));
    if (!near.empty()) fault.message += "; did you mean `" + near + "`?";
    fault.expected = "a key of the converter file with its table, such as operating.output_voltage";
    throw InputError(fault);
}

std::vector<ConverterKey> converter_keys() {
    std::vector<ConverterKey> out;
    for (const Key& key : kKeys) {
        std::string takes;
        switch (key.takes) {
            case Takes::quantity:
                takes = expected_text(key.unit);
                break;
            case Takes::range:
                takes = std::string(expected_text(key.unit)) + ", or a range";
                break;
            case Takes::whole:
                takes = "a whole number";
                break;
            case Takes::numbers:
                takes = "a list of numbers";
                break;
            case Takes::text:
                takes = "a text";
                break;
            case Takes::flag:
                takes = "true or false";
                break;
            case Takes::word:
            case Takes::special:
                break;
        }
        if (key.takes == Takes::word || (key.takes == Takes::special && !key.words.empty()))
            for (const auto& word : split_words(key.words)) takes += (takes.empty() ? "" : " | ") + word;
        if (key.key == "topology")
            for (const Topology& topology : topologies())
                takes += (takes.empty() ? "" : " | ") + std::string(topology.name);
        if (takes.empty())
            takes = key.key == "format"   ? "1"
                    : key.key == "fitted" ? "a lot label or a part name"
                                          : "a voltage, with its current";
        out.push_back(
            {std::string(key.table), std::string(key.key), std::move(takes), std::string(key.meaning), key.needed});
    }
    return out;
}

}  // namespace binwright
