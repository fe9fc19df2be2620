#include <spdlog/sinks/null_sink.h>
#include <spdlog/spdlog.h>

#include "tests/diagnostics/page.hpp"

using namespace halflsb::diagnostics;

int main() {
    // What is logged has its time with it.
    spdlog::set_default_logger(spdlog::null_logger_mt("silent"));
    Page page;
    command_line_chapter(page);
    toml_chapter(page);
    plan_chapter(page);
    each_chapter(page);
    stimulus_chapter(page);
    signal_file_chapter(page);
    filter_chapter(page);
    arithmetic_chapter(page);
    design_chapter(page);
    coefficient_file_chapter(page);
    rule_chapter(page);
    rate_chapter(page);
    baseline_chapter(page);
    rig_chapter(page);
    file_chapter(page);
    board_chapter(page);
    wire_chapter(page);
    record_chapter(page);
    judge_chapter(page);
    verdict_chapter(page);
    companion_chapter(page);
    device_chapter(page);
    return page.is_complete() ? 0 : 1;
}
