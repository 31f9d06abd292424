// The one place that knows which generation of Catch2 is installed (2.13 on Debian 12, 3 on newer systems).
#pragma once

#if __has_include(<catch2/catch_all.hpp>)
#include <catch2/catch_all.hpp>
using Catch::Approx;
#else
#include <catch2/catch.hpp>
#endif
