// Reads a table of tests/published; fields are asked for by the beginning of their column's head.
#pragma once

#include <catch2/catch.hpp>
#include <cstdlib>
#include <fstream>
#include <sstream>
#include <string>
#include <vector>

#include "tests/support/source_dir.hpp"

namespace halflsb::testing {

class CsvTable {
public:
    explicit CsvTable(const std::string& name) {
        std::ifstream file(test::source_path("tests/published/" + name));
        INFO("tests/published/" << name);
        REQUIRE(file.good());
        std::string line;
        while (std::getline(file, line)) {
            if (!line.empty() && line.back() == '\r') line.pop_back();
            if (!line.empty()) rows_.push_back(fields_of(line));
        }
        REQUIRE(rows_.size() > 1);
    }

    std::size_t rows() const { return rows_.size() - 1; }

    std::string text(std::size_t row, const std::string& head) const {
        const auto& heads = rows_[0];
        for (std::size_t column = 0; column < heads.size(); ++column) {
            if (heads[column].compare(0, head.size(), head) != 0) continue;
            REQUIRE(column < rows_[row + 1].size());
            return rows_[row + 1][column];
        }
        FAIL("no column \"" << head << "\"");
        return {};
    }

    bool has(std::size_t row, const std::string& head) const { return !text(row, head).empty(); }

    double number(std::size_t row, const std::string& head) const {
        const std::string field = text(row, head);
        char* end = nullptr;
        const double value = std::strtod(field.c_str(), &end);
        INFO("row " << row << ", column \"" << head << "\": \"" << field << '"');
        REQUIRE((end != field.c_str() && *end == '\0'));
        return value;
    }

private:
    static std::vector<std::string> fields_of(const std::string& line) {
        std::vector<std::string> fields(1);
        bool quoted = false;
        for (const char c : line) {
            if (c == '"') {
                quoted = !quoted;
            } else if (c == ',' && !quoted) {
                fields.emplace_back();
            } else {
                fields.back() += c;
            }
        }
        return fields;
    }

    std::vector<std::vector<std::string>> rows_;
};

}  // namespace halflsb::testing
