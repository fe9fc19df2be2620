// A page of docs that holds text made from tables, between <!-- generated: NAME --> and <!-- end -->.
// With HALFLSB_UPDATE_DOCS set the part is written anew before it is compared.
#pragma once

#include <catch2/catch.hpp>
#include <cstdlib>
#include <fstream>
#include <iterator>
#include <string>

#include "tests/support/source_dir.hpp"

namespace halflsb::test {

inline std::string page_text(const std::string& page) {
    std::ifstream file(source_path("docs/" + page), std::ios::binary);
    return {std::istreambuf_iterator<char>(file), {}};
}

inline void check_generated_part(const std::string& page, const std::string& name, const std::string& expected) {
    const std::string begin = "<!-- generated: " + name + " -->\n", end = "<!-- end -->\n";
    std::string text = page_text(page);
    const std::size_t from = text.find(begin);
    REQUIRE(from != std::string::npos);
    const std::size_t to = text.find(end, from);
    REQUIRE(to != std::string::npos);
    if (std::getenv("HALFLSB_UPDATE_DOCS") != nullptr) {
        text = text.substr(0, from + begin.size()) + expected + text.substr(to);
        std::ofstream(source_path("docs/" + page), std::ios::binary) << text;
    }
    INFO("HALFLSB_UPDATE_DOCS=1 writes docs/" + page + " anew");
    CHECK(page_text(page).find(begin + expected + end) != std::string::npos);
}

}  // namespace halflsb::test
