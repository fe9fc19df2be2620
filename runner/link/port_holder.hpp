// Who has a device open: for the message of a port that is busy.
#pragma once

#include <sys/types.h>

#include <string>

namespace halflsb {

/// "minicom (process 4711)" of the first other process that has this device open; this process too,
/// through another descriptor than `own_descriptor`. "" when the system does not tell (another user's).
std::string holder_of(dev_t device, int own_descriptor);

}  // namespace halflsb
