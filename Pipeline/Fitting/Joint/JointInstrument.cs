using Pipeline.Apparatus;
using Pipeline.Backgrounds;
using Pipeline.Reduction;
using Pipeline.Response;

namespace Pipeline.Fitting;

/// <summary>The response of several runs as one matrix: the bins of their windows one after the other.</summary>
sealed class JointInstrument
{
    readonly IReadOnlyList<JointMember> _members;
    readonly IReadOnlyList<NetSignal> _signals;
    readonly IReadOnlyList<FitWindow> _windows;
    readonly VelocityGrid _grid;
    readonly ResponseMatrix?[] _untimed;

    public JointInstrument(IReadOnlyList<JointMember> members, IReadOnlyList<NetSignal> signals, IReadOnlyList<FitWindow> windows, VelocityGrid grid)
    {
        (_members, _signals, _windows, _grid) = (members, signals, windows, grid);
        _untimed = new ResponseMatrix?[members.Count];
    }

    /// <summary>Whether any run tells arrival times.</summary>
    public bool NeedsPulse => _members.Any(m => ResponseModes.Named(m.Mode).Scanned != Scanned.Detuning);

    /// <summary>Whether runs tell the pulse from the speed: by their frequency, or by arrival at two distances.</summary>
    public bool TellsPulse => _members.Any(m => ResponseModes.Named(m.Mode).Scanned != Scanned.Nothing) || _members.Select(m => m.Setup.Beamline.SourceToProbe.Value).Distinct().Count() > 1;

    /// <summary>With another pulse; runs without arrival times do not see it.</summary>
    public ResponseMatrix With(EmissionProfile pulse) => Stack([.. _members.Select((m, k) => ResponseModes.Named(m.Mode).Scanned == Scanned.Detuning
        ? _untimed[k] ??= Build(k, m.Setup) : Build(k, m.Setup with { Emission = pulse }))]);

    /// <summary>With the setups of some runs changed.</summary>
    /// <param name="pulse">In all of them.</param>
    /// <param name="which">Indices of the runs.</param>
    /// <param name="change">Of their setups.</param>
    public ResponseMatrix With(EmissionProfile pulse, IReadOnlyCollection<int> which, Func<Setup, Setup> change) =>
        Stack([.. _members.Select((m, k) => Build(k, which.Contains(k) ? change(m.Setup with { Emission = pulse }) : m.Setup with { Emission = pulse }))]);

    ResponseMatrix Build(int k, Setup setup) => ResponseModes.Named(_members[k].Mode).Build(setup, _members[k].Condition, _signals[k].Axis, _grid);

    ResponseMatrix Stack(ResponseMatrix[] parts)
    {
        int bins = _windows.Sum(w => w.Count);
        var columns = new double[_grid.Cells][];
        for (int c = 0; c < columns.Length; c++)
        {
            double[] column = columns[c] = new double[bins];
            int offset = 0;
            for (int k = 0; k < parts.Length; offset += _windows[k++].Count)
            {
                ReadOnlySpan<double> own = parts[k].Column(c);
                for (int b = 0; b < own.Length; b++)
                    if (parts[k].First(c) + b - _windows[k].First is var at && at >= 0 && at < _windows[k].Count) column[offset + at] = own[b];
            }
        }
        return new ResponseMatrix(new SignalAxis(0, 1, [.. Enumerable.Range(0, bins + 1)]), _grid, columns);
    }
}
