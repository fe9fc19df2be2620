// Every diagnostic that the program can give, printed as one text: wording is reviewed as a whole, and a change of
// it is seen in expected.txt. Each chapter provokes its messages through the functions that make them.
#pragma once

#include <functional>
#include <string>
#include <string_view>
#include <utility>
#include <vector>

#include "stimuli/outcome.hpp"

namespace halflsb::diagnostics {

class Page {
public:
    void chapter(std::string_view title);
    /// `text` as the user reads it, under a line that says what was done to get it.
    void show(std::string_view done, std::string_view text);
    void show(std::string_view done, const Error& error) { show(done, to_text(error)); }
    /// The error of an outcome; that there is none is an error of ours, and said.
    template <class T>
    void show(std::string_view done, const Outcome<T>& outcome) {
        if (outcome) {
            missing(done);
        } else {
            show(done, outcome.error());
        }
    }
    /// Nothing was said where something should have been.
    void missing(std::string_view done);
    bool is_complete() const { return is_complete_; }

private:
    bool is_complete_ = true;
};

/// A text with the one place where `from` stands replaced; an empty `from` puts `to` at the end.
std::string spoilt(const std::string& text, std::string_view from, std::string_view to);

/// With every `first` replaced by its `second`: what differs between machines.
std::string replaced(std::string text, const std::vector<std::pair<std::string, std::string>>& words);

void command_line_chapter(Page& page);
void toml_chapter(Page& page);
void plan_chapter(Page& page);
void each_chapter(Page& page);
void stimulus_chapter(Page& page);
void signal_file_chapter(Page& page);
void filter_chapter(Page& page);
void arithmetic_chapter(Page& page);
void design_chapter(Page& page);
void coefficient_file_chapter(Page& page);
void rule_chapter(Page& page);
void rate_chapter(Page& page);
void baseline_chapter(Page& page);
void rig_chapter(Page& page);
void file_chapter(Page& page);
void board_chapter(Page& page);
void wire_chapter(Page& page);
void record_chapter(Page& page);
void judge_chapter(Page& page);
void verdict_chapter(Page& page);
void companion_chapter(Page& page);
void device_chapter(Page& page);

}  // namespace halflsb::diagnostics
