// SPDX-License-Identifier: GPL-3.0-or-later
// What a converter file says (TOML), read with places, and a text of it that can be changed value by value.
// Inside: SI units, temperatures in kelvin. Absent keys stay absent; nothing is defaulted in silence.
#pragma once
#include <map>
#include <optional>
#include <string>
#include <string_view>
#include <vector>

#include "engine/network/steady_state.hpp"
#include "engine/part/part.hpp"

namespace binwright {

/// The dimensions of the operating range, also what `--at`, the window's first line and spans speak of.
enum class OperatingQuantity { input_voltage, output_voltage, output_current, frequency, ambient };
struct OperatingInfo {
    OperatingQuantity quantity;
    std::string_view key;      ///< "input_voltage"
    std::string_view meaning;  ///< "input voltage"
    Unit unit;
};
inline constexpr OperatingInfo kOperating[] = {
    {OperatingQuantity::input_voltage, "input_voltage", "input voltage", Unit::volt},
    {OperatingQuantity::output_voltage, "output_voltage", "output voltage", Unit::volt},
    {OperatingQuantity::output_current, "output_current", "output current", Unit::ampere},
    {OperatingQuantity::frequency, "frequency", "switching frequency", Unit::hertz},
    {OperatingQuantity::ambient, "ambient", "ambient temperature", Unit::celsius},
};

/// One point of the operating range. ambient in kelvin.
struct At {
    double input_voltage = 0, output_voltage = 0, output_current = 0, frequency = 0, ambient = 0;
    [[nodiscard]] double get(OperatingQuantity quantity) const;
    void set(OperatingQuantity quantity, double value);
};

struct OperatingRange {
    Range input_voltage, output_voltage, output_current, frequency, ambient;
    LoadKind load = LoadKind::current;
    std::optional<double> output_tolerance;  ///< fraction
    std::optional<double> output_ripple;     ///< requirement, peak to peak [V]
    std::optional<double> life;              ///< requirement [s]
    std::optional<At> typical;               ///< given; else see typical_point
    [[nodiscard]] Range get(OperatingQuantity quantity) const;
    void set(OperatingQuantity quantity, Range range);
};

struct SourceConfig {
    double resistance = 0, inductance = 0;
    std::optional<double> surge;  ///< highest transient input [V]
    bool switched = true;
};

struct WindingConfig {
    double inductance = 0;  ///< 0 = not given, as is a resistance of 0
    std::optional<double> tolerance;  ///< fraction
    double resistance = 0;
    std::optional<double> saturation_current, saturation_drop;
    std::string core;  ///< "ferrite" | "powder" | "other" | ""
    std::optional<double> turns, wire_diameter, core_loss, core_area, core_volume;
    std::vector<double> steinmetz;  ///< k, alpha, beta
};

struct WindingsConfig {
    std::optional<Range> coupling, leakage;
    double turns_ratio = 1;
    std::optional<WindingConfig> primary, secondary;
};

struct DriveConfig {
    std::optional<Range> voltage, sense_threshold;
    std::optional<double> resistance, maximum_duty, minimum_on_time, sense_resistance, sense_power, slope_compensation,
        blanking, delay, undervoltage_lockout;
    std::string short_circuit;  ///< "limit" | "hiccup" | "latch" | ""
};

struct FeedbackConfig { std::optional<double> reference, upper, lower, trimmer; };
struct FuseConfig { std::optional<double> rating, melting; };
struct ClampConfig { std::optional<double> voltage, power; };

struct FittedConfig {
    std::string lot;  ///< a lot label or a part name of the bin
    int count = 1;
    Place place;
};

/// A bare circuit element, used exactly as given.
struct ElementConfig { std::optional<double> resistance, drop, capacitance; };

struct SeatConfig {
    std::string reference;             ///< "Q1"
    std::vector<FittedConfig> fitted;  ///< one entry, or one a kind of a mixed bank
    int count = 1;                     ///< in parallel, of what is typed in the file where `fitted` names nothing
    std::vector<Figure> figures;       ///< typed in the file: instead of, or on top of, a part (known = told)
    std::map<std::string, std::string> attributes;  ///< typed beside the figures: technology, arrangement …
    std::optional<ElementConfig> element;
    std::string heatsink;                     ///< name of a [heatsink.x]; empty = none
    std::optional<double> interface_resistance;  ///< case to sink [K/W]
    struct Overshoot { double voltage; std::optional<double> at_current; };
    std::optional<Overshoot> overshoot;       ///< measured
    double warmer_by = 0;                     ///< [K]
    std::string charged_by;                   ///< condition for tantalum surge; empty = not said
    std::vector<Lot> as_fitted;  ///< figures a saved file carries, one entry a kind, so that it means the same elsewhere
};

struct AcrossConfig {
    std::string name;
    std::string between;  ///< input | output | switch | rectifier | coupling
    std::vector<Figure> figures;
    std::map<std::string, std::string> attributes;  ///< technology …
};

struct Converter {
    std::string file;  ///< where it was read from, for messages
    std::string title;
    const Topology* topology = nullptr;
    OperatingRange operating;
    std::optional<SourceConfig> source;
    WindingsConfig winding;
    DriveConfig drive;
    FeedbackConfig feedback;
    FuseConfig fuse;
    ClampConfig clamp;
    std::map<std::string, double> heatsinks;  ///< name → K/W to the air inside
    std::optional<double> enclosure;          ///< inner air to ambient [K/W]
    std::map<Seat, SeatConfig> seats;         ///< only those the file mentions
    std::vector<AcrossConfig> across;
    [[nodiscard]] const SeatConfig& seat(Seat seat) const;  ///< an empty one when the file does not mention it
    [[nodiscard]] std::string reference(Seat seat) const;   ///< "Q1", or the seat's name when none is given
};

/// The typical point: given, or the middle of each range.
[[nodiscard]] At typical_point(const Converter& converter);

/// Reads a converter file. `changes` are "KEY=VALUE" pairs of --with ("heatsink.small.resistance=3 K/W",
/// "operating.output_voltage=18 V", "seat.switch.fitted=417-H"), applied as if the file said so.
/// @throws InputError with every fault: syntax, unknown keys (naming the nearest known one), units, ranges, contradictions
[[nodiscard]] Converter read_converter(std::string_view text, const std::string& file,
                                       const std::vector<std::string>& changes = {});

/// Changes one value (dotted key, value as written in TOML or as a bare quantity) in the text of a converter file, keeping
/// comments, order and everything else to the byte; adds the key, and its table, where they are missing.
/// @throws InputError when the key is unknown or the result is not a sound converter file
[[nodiscard]] std::string change_converter_text(std::string_view text, const std::string& file, std::string_view key,
                                                std::string_view value);

/// The keys of a converter file, in the order of its tables, for listings and help. Figures go by their symbols instead.
struct ConverterKey {
    std::string table;    ///< "" | "operating" | "heatsink.*" | "seat.*.element" | "across[]" …
    std::string key;
    std::string takes;    ///< "a voltage such as 12 V, or a range", "limit | hiccup | latch" …
    std::string meaning;
    bool needed = false;  ///< its table may not be without it
};
[[nodiscard]] std::vector<ConverterKey> converter_keys();

/// A commented, sound converter file of this topology to start from.
struct NewConverter {
    std::string title;
    Range input_voltage, output_voltage, output_current;
    double frequency = 100e3;
};
[[nodiscard]] std::string new_converter_text(const Topology& topology, const NewConverter& answers);

}  // namespace binwright
