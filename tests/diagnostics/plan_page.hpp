// Plans to spoil, and what their reader says of them.
#pragma once

#include <string>
#include <string_view>
#include <vector>

#include "tests/diagnostics/page.hpp"
#include "tests/support/fake_files.hpp"

namespace halflsb::diagnostics {

struct Change {
    std::string_view done;
    std::string_view from, to;  ///< as of spoilt()
};

/// A small plan put together of parts.
struct Parts {
    std::string signal = "rate_hz = 1200.0\ninput = \"q15\"\noutput = \"q15\"\n";
    std::string filter = "kind = \"moving-average\"\npoints = 4\n";
    std::string rule = "kind = \"error\"\nmax_lsb = 1.5\n";
    std::string of_case;
    std::string stimulus = "shape = \"noise\"\nlength_samples = 4096\n";
    std::string after;

    std::string text() const;
};

/// All that the reader has to say of the plan.
void show_plan(Page& page, std::string_view done, const std::string& text, FakeFiles files = {});
void show_changes(Page& page, const std::string& good, const std::vector<Change>& changes, const FakeFiles& files = {});

}  // namespace halflsb::diagnostics
