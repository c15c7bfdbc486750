using Pipeline.Comparison;
using Pipeline.Reduction;

namespace Pipeline.Reports;

/// <summary>Names as pages and tables show them.</summary>
static class Words
{
    public static string Of(Judgement judgement) => judgement switch
    {
        Judgement.Agrees => "agrees",
        Judgement.Disagrees => "disagrees",
        _ => "undecided",
    };

    public static string Of(ShotKind kind) => kind switch
    {
        ShotKind.Signal => "signal",
        ShotKind.NoAblation => "no ablation",
        ShotKind.ProbeBlocked => "probe blocked",
        _ => "dark",
    };
}
