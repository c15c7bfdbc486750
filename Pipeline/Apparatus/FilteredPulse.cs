namespace Pipeline.Apparatus;

/// <summary>A pulse in pieces as a one-pole filter leaves it; exact for the pieces.</summary>
/// <remarks>tau G' + G = F, so the integral of G is that of F less tau G. In a piece F is quadratic, and G a quadratic and an exponential.</remarks>
sealed record FilteredPulse : EmissionProfile
{
    readonly PulseShape _shape;
    readonly double _timeConstant;
    readonly double[] _filtered;

    /// <param name="shape">Unfiltered.</param>
    /// <param name="timeConstant">1/e time of the filter, s.</param>
    /// <param name="name">Of the unfiltered pulse.</param>
    public FilteredPulse(PulseShape shape, double timeConstant, string name)
    {
        (_shape, _timeConstant, Name) = (shape, timeConstant, $"{name}, filtered");
        _filtered = new double[shape.Count + 1];
        for (int i = 0; i < shape.Count; i++) _filtered[i + 1] = shape.Filtered(i, shape.Length(i), _filtered[i], timeConstant);
    }

    public override string Name { get; }
    public override double MeanTime => _shape.Mean + _timeConstant;
    public override (double Low, double High) Support => (_shape.Start, _shape.End + 35 * _timeConstant);

    public override double CumulativeAt(double time)
    {
        if (time <= _shape.Start) return 0;
        if (time >= _shape.End) return 1 - (1 - _filtered[^1]) * Math.Exp((_shape.End - time) / _timeConstant);
        (int piece, double since) = _shape.Place(time);
        return _shape.Filtered(piece, since, _filtered[piece], _timeConstant);
    }

    public override double IntegratedCumulativeAt(double time) => _shape.IntegralBefore(time) - _timeConstant * CumulativeAt(time);
}
