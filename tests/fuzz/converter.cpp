// SPDX-License-Identifier: GPL-3.0-or-later
// Reading a converter file only ever returns or throws InputError; a change that is taken can be read again.
// Not part of the ordinary build. By hand, from the source tree:
//   clang++ -std=c++20 -g -O1 -fsanitize=fuzzer,address,undefined -I. tests/fuzz/converter.cpp engine/converter/*.cpp
//     engine/quantity/*.cpp engine/part/*.cpp engine/network/topology.cpp -lfmt -o fuzz-converter
//   ./fuzz-converter -max_total_time=60 CORPUS app/demo tests/broken
#include "engine/converter/converter.hpp"

#include <cstddef>
#include <cstdint>
#include <cstdlib>
#include <string>

extern "C" int LLVMFuzzerTestOneInput(const std::uint8_t* data, std::size_t size) {
    const std::string text(reinterpret_cast<const char*>(data), size);
    try {
        (void)binwright::read_converter(text, "fuzz.toml", {"output_voltage=18 V"});
    } catch (const binwright::InputError& error) {
        if (error.faults.empty()) std::abort();
    }
    try {
        const std::string changed = binwright::change_converter_text(text, "fuzz.toml", "seat.switch.count", "2");
        if (binwright::read_converter(changed, "fuzz.toml").seat(binwright::Seat::switch_).count != 2) std::abort();
    } catch (const binwright::InputError&) {
    }
    return 0;
}
