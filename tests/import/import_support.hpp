// SPDX-License-Identifier: GPL-3.0-or-later
// What is wrong with a text, as the sentences people read.
#pragma once
#include <string>
#include <vector>

#include "engine/fault.hpp"

namespace binwright::test {

/// Every fault that `action` throws as "FILE:LINE:COLUMN: message"; none where it throws nothing.
template <class Action>
std::vector<std::string> faults_of(Action action) {
    std::vector<std::string> found;
    try {
        (void)action();
    } catch (const InputError& error) {
        for (const Fault& fault : error.faults) found.push_back(to_string(fault));
    }
    return found;
}

}  // namespace binwright::test
