// SPDX-License-Identifier: GPL-3.0-or-later
#include "engine/converter/converter.hpp"

#include <algorithm>
#include <tuple>

#include "engine/converter/item.hpp"
#include "engine/converter/read.hpp"

namespace binwright {

double At::get(OperatingQuantity quantity) const {
    switch (quantity) {
        case OperatingQuantity::input_voltage:
            return input_voltage;
        case OperatingQuantity::output_voltage:
            return output_voltage;
        case OperatingQuantity::output_current:
            return output_current;
        case OperatingQuantity::frequency:
            return frequency;
        case OperatingQuantity::ambient:
            return ambient;
    }
    return 0;
}

void At::set(OperatingQuantity quantity, double value) {
    switch (quantity) {
        case OperatingQuantity::input_voltage:
            input_voltage = value;
            break;
        case OperatingQuantity::output_voltage:
            output_voltage = value;
            break;
        case OperatingQuantity::output_current:
            output_current = value;
            break;
        case OperatingQuantity::frequency:
            frequency = value;
            break;
        case OperatingQuantity::ambient:
            ambient = value;
            break;
    }
}

Range OperatingRange::get(OperatingQuantity quantity) const {
    switch (quantity) {
        case OperatingQuantity::input_voltage:
            return input_voltage;
        case OperatingQuantity::output_voltage:
            return output_voltage;
        case OperatingQuantity::output_current:
            return output_current;
        case OperatingQuantity::frequency:
            return frequency;
        case OperatingQuantity::ambient:
            return ambient;
    }
    return {};
}

void OperatingRange::set(OperatingQuantity quantity, Range range) {
    switch (quantity) {
        case OperatingQuantity::input_voltage:
            input_voltage = range;
            break;
        case OperatingQuantity::output_voltage:
            output_voltage = range;
            break;
        case OperatingQuantity::output_current:
            output_current = range;
            break;
        case OperatingQuantity::frequency:
            frequency = range;
            break;
        case OperatingQuantity::ambient:
            ambient = range;
            break;
    }
}

const SeatConfig& Converter::seat(Seat seat) const {
    static const SeatConfig none;
    const auto found = seats.find(seat);
    return found == seats.end() ? none : found->second;
}

std::string Converter::reference(Seat seat) const {
    const std::string& given = this->seat(seat).reference;
    return given.empty() ? std::string(to_string(seat)) : given;
}

At typical_point(const Converter& converter) {
    if (converter.operating.typical) return *converter.operating.typical;
    At at;
    for (const OperatingInfo& each : kOperating) at.set(each.quantity, converter.operating.get(each.quantity).middle());
    return at;
}

Converter read_converter(std::string_view text, const std::string& file, const std::vector<std::string>& changes) {
    std::vector<Fault> faults;
    ItemText items = read_items(text, file, faults);
    for (const std::string& change : changes) apply_change(items.root, change, faults);
    // Without a single readable line there is nothing to say beyond why.
    if (!items.whole && items.root.members.empty()) throw InputError(faults);
    Converter converter = converter_from(items.root, file, items.whole, !changes.empty(), faults);
    if (faults.empty()) return converter;
    std::stable_sort(faults.begin(), faults.end(), [&file](const Fault& a, const Fault& b) {
        const auto rank = [&file](const Fault& fault) {
            return std::tuple(fault.place.file != file, fault.place.line, fault.place.column);
        };
        return rank(a) < rank(b);
    });
    throw InputError(faults);
}

}  // namespace binwright
