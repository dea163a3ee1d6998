// SPDX-License-Identifier: GPL-3.0-or-later
// The TOML parser, the same in every source that uses it. Version 3.3 asserts some things of its input that a broken file
// does not keep (a table header `[=`): where assertions are on that would end the program, and where they are assumed it
// would be undefined. Each is followed by a proper refusal, so here they say nothing and the refusal is reached.
#pragma once
#ifdef NDEBUG
#define BINWRIGHT_HAD_NDEBUG
#undef NDEBUG
#endif
#define TOML_ASSERT(expr) static_assert(true)
#include <toml++/toml.h>
#ifdef BINWRIGHT_HAD_NDEBUG
#undef BINWRIGHT_HAD_NDEBUG
#define NDEBUG
#endif
