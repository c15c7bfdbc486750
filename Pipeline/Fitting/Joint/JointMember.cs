using Pipeline.Apparatus;
using Pipeline.Reduction;

namespace Pipeline.Fitting;

/// <summary>One run of several that share a beam.</summary>
/// <param name="Name">Name of the run.</param>
/// <param name="Run">Its sums.</param>
/// <param name="Condition">The condition whose beam is shared.</param>
/// <param name="Setup">The apparatus as this run saw it.</param>
/// <param name="Mode">A mode with a response: arrival, doppler, map.</param>
public sealed record JointMember(string Name, BinnedRun Run, string Condition, Setup Setup, string Mode);
