namespace GainMargin;

/// <summary>Sums over the terms of a loop: value and slope at the middle of a cell, bounds of both derivatives over the cell.</summary>
internal struct TermSums
{
    public double Real, RealSlope, Real1, Real2, RealModuli;
    public double Imaginary, ImaginarySlope, Imaginary1, Imaginary2, ImaginaryModuli;

    /// <remarks>
    /// With roots at distances <c>δ₁, δ₂</c> from the cell: <c>|1/P|′ ≤ (1/δ₁+1/δ₂)/δ₁δ₂</c>, <c>|1/P|″ ≤ ((1/δ₁+1/δ₂)² +
    /// 1/δ₁²+1/δ₂²)/δ₁δ₂</c>, and as <c>t/P</c> is the mean of <c>1/(z − ζ)</c> over both, <c>|t/P|′ ≤ (1/δ₁²+1/δ₂²)/2</c>,
    /// <c>|t/P|″ ≤ 1/δ₁³+1/δ₂³</c>.
    /// </remarks>
    public void Add(LoopTerms terms, int k, double t, double radius)
    {
        double h = terms.Square[k];
        double pole = (t * t) + h;
        double inverse = 1 / pole;
        double inverseSlope = -2 * t * inverse * inverse;
        double ratio = t * inverse;
        double ratioSlope = (h - (t * t)) * inverse * inverse;
        double near1;
        double near2;
        if (h >= 0)
        {
            double gap = Math.Max(0, Math.Abs(t) - radius);
            near1 = near2 = 1 / Math.Sqrt((gap * gap) + h);
        }
        else
        {
            double apart = Math.Sqrt(-h);
            near1 = 1 / Math.Max(0, Math.Abs(t - apart) - radius);
            near2 = 1 / Math.Max(0, Math.Abs(t + apart) - radius);
        }

        double product = near1 * near2;
        double squares = (near1 * near1) + (near2 * near2);
        double inverse1 = (near1 + near2) * product;
        double inverse2 = (((near1 + near2) * (near1 + near2)) + squares) * product;
        double ratio1 = 0.5 * squares;
        double ratio2 = (near1 * near1 * near1) + (near2 * near2 * near2);

        var (r0, r1, i0, i1) = (terms.Real0[k], terms.Real1[k], terms.Imaginary0[k], terms.Imaginary1[k]);
        Real += (r0 * inverse) + (r1 * ratio);
        RealSlope += (r0 * inverseSlope) + (r1 * ratioSlope);
        Real1 += (Math.Abs(r0) * inverse1) + (Math.Abs(r1) * ratio1);
        Real2 += (Math.Abs(r0) * inverse2) + (Math.Abs(r1) * ratio2);
        RealModuli += Math.Abs(r0 * inverse) + Math.Abs(r1 * ratio);
        Imaginary += (i0 * inverse) + (i1 * ratio);
        ImaginarySlope += (i0 * inverseSlope) + (i1 * ratioSlope);
        Imaginary1 += (Math.Abs(i0) * inverse1) + (Math.Abs(i1) * ratio1);
        Imaginary2 += (Math.Abs(i0) * inverse2) + (Math.Abs(i1) * ratio2);
        ImaginaryModuli += Math.Abs(i0 * inverse) + Math.Abs(i1 * ratio);
    }
}
