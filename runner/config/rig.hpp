// What the lab says: how to reach one board, and the commands that may run. A rig is trusted; a plan is
// not, and can name none of this.
#pragma once

#include <cstddef>
#include <string>
#include <vector>

namespace halflsb {

struct Rig {
    std::string file;    ///< as given
    std::string folder;  ///< of the file; commands run in it
    std::string name;    ///< of the board

    std::string port;  ///< "usb:VID:PID[:SERIAL]" or a device path, relative to the current folder
    long baud = 0;

    int block_samples = 0;
    double answer_s = 0.0;  ///< the longest silence while answers are due
    double greet_s = 0.0;   ///< the longest wait for the whole greeting

    int attempts = 1;  ///< how often a case whose capture was invalid may run, in all

    std::vector<std::vector<std::string>> before_run;  ///< argument lists, in order
    double before_run_limit_s = 0.0;                   ///< of each command
};

/// The arguments with {image} replaced.
std::vector<std::string> with_image(const std::vector<std::string>& arguments, const std::string& image);
/// Some command of the rig wants {image}, so --image must be given.
bool wants_image(const Rig& rig);

}  // namespace halflsb
