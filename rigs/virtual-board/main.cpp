#include <sys/prctl.h>
#include <unistd.h>

#include <csignal>
#include <iostream>

#include "rigs/virtual-board/clean_decisions.hpp"
#include "rigs/virtual-board/serve.hpp"

namespace {

constexpr int bad_command_line = 64, cannot_run = 70;

int complain(const std::string& problem, int status) {
    std::cerr << "virtual-board: " << problem << "\n";
    return status;
}

}  // namespace

int main(int argument_count, char** arguments) {
    using namespace halflsb::board;
    Options options;
    std::string problem = read_options({arguments + 1, arguments + argument_count}, options);
    if (!problem.empty()) return complain(problem, bad_command_line);
    if (options.help) {
        std::cout << usage();
        return 0;
    }

    // Names are looked at with right tables; then the tables are made with their faults.
    AverageSetting average;
    const std::vector<FilterParts> known = choose_filters(options.filter_set, every_filter({}, average), problem);
    if (known.empty()) return complain(problem, bad_command_line);
    if (options.list_filters) {
        std::cout << filter_list(known);
        return 0;
    }
    if (options.list_faults) {
        std::cout << fault_list(known);
        return 0;
    }
    Faults faults;
    for (const std::string& fault : options.faults) {
        problem = add_fault(fault, known, faults);
        if (!problem.empty()) return complain(problem, bad_command_line);
    }
    std::vector<FilterParts> chosen = choose_filters(options.filter_set, every_filter(faults.tables, average), problem);
    if (chosen.size() > most_filters)
        return complain("at most " + std::to_string(most_filters) + " filters", bad_command_line);

    if (options.dies_with_parent) ::prctl(PR_SET_PDEATHSIG, SIGTERM);
    take_signals();
    Board board(options, std::move(chosen), average, faults);
    PseudoTerminal terminal;
    problem = terminal.open(options.link);
    if (!problem.empty()) return complain(problem, cannot_run);
    std::cout << terminal.device() << std::endl;
    if (options.ready_descriptor >= 0) {
        const std::string line = terminal.device() + "\n";
        if (::write(options.ready_descriptor, line.data(), line.size()) < 0) {
            return complain("--ready-fd: cannot write there", cannot_run);
        }
    }
    problem = serve(terminal, board, options, faults);
    return problem.empty() ? 0 : complain(problem, cannot_run);
}
