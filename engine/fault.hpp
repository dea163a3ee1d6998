// SPDX-License-Identifier: GPL-3.0-or-later
// How the engine says that it cannot go on: a wrong input with its place, a value outside a model, a stop on request.
#pragma once
#include <functional>
#include <stdexcept>
#include <string>
#include <utility>
#include <vector>

namespace binwright {

/// Where in a text something stands. Lines and columns count from 1 (columns in characters); 0 = not known.
struct Place {
    std::string file;
    int line = 0;
    int column = 0;
};

/// One thing wrong with an input: where, in which field, what is wrong, and what was expected there.
struct Fault {
    Place place;
    std::string field;     ///< dotted key, column name or option; empty when there is none
    std::string message;   ///< one sentence, complete in itself
    std::string expected;  ///< what would have been accepted, e.g. "a voltage such as 12 V"; empty when the message says it
};

/// "FILE:LINE:COLUMN: message", leaving out what is not known.
[[nodiscard]] inline std::string to_string(const Fault& fault) {
    std::string text = fault.place.file;
    if (fault.place.line > 0) text += ":" + std::to_string(fault.place.line);
    if (fault.place.line > 0 && fault.place.column > 0) text += ":" + std::to_string(fault.place.column);
    return text.empty() ? fault.message : text + ": " + fault.message;
}

/// The input is at fault (exit status 2). Carries every fault found, never only the first.
class InputError : public std::runtime_error {
  public:
    explicit InputError(std::vector<Fault> found)
        : std::runtime_error(found.empty() ? "faulty input" : to_string(found.front())), faults(std::move(found)) {}
    explicit InputError(Fault fault) : InputError(std::vector<Fault>{std::move(fault)}) {}
    std::vector<Fault> faults;
};

/// A value lies outside what a model can compute; the text names the input, its value and the bound.
class OutsideModel : public std::domain_error {
  public:
    using std::domain_error::domain_error;
};

/// Somebody asked a long computation to stop.
class Stopped : public std::runtime_error {
  public:
    Stopped() : std::runtime_error("stopped") {}
};

/// Called now and then by long computations with the share done (0 … 1); returning false makes them throw Stopped.
/// May be empty. Called from any thread.
using Progress = std::function<bool(double)>;

}  // namespace binwright
