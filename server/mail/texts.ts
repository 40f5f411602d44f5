/** Mail texts by language and kind. Translations need a native reader before release. */
export const mailTexts = {
  en: {
    invitation: { subject: 'Your invitation to {estate}', text: 'Hello {name},\n\n{inviter} invites you to {estate} as {role}.\n\nOpen this link within {days} days; it works once:\n{link}\n\nIf you did not expect this, do nothing.' },
    assignment: { subject: '{estate}: round in {block} on {date}', text: 'Hello {name},\n\nyou have a round in {block} on {date}: {vines} vines. Start: {gate}.\n\nOpen it before you leave the house, so that it is on your phone:\n{link}\n\n{notes}\n\nThe product label, posted signs, the responsible person and local law come first.' },
    zoningDone: { subject: '{estate}: zoning of {block} is ready', text: 'Hello {name},\n\nthe zoning of {block} is ready to read:\n{link}' },
    pickNotice: { subject: '{estate}: pick notice {number}', text: 'Hello {name},\n\n{body}\n\nConfirm that you have read it:\n{link}' },
    restriction: { subject: '{estate}: do not enter {block}', text: 'Hello {name},\n\nDo not enter {block} until {until}. Product: {product}. Interval as typed from the label: {interval}. Set by {setter}.\n\nThe product label, posted signs, the responsible person and local law come first.' },
    reset: { subject: 'Set a new password', text: 'Hello {name},\n\nopen this link within one hour to set a new password; it works once:\n{link}\n\nIf you did not ask for this, do nothing: your password stays as it is.' },
  },
  es: {
    invitation: { subject: 'Su invitación a {estate}', text: 'Hola {name}:\n\n{inviter} le invita a {estate} como {role}.\n\nAbra este enlace en un plazo de {days} días; sirve una sola vez:\n{link}\n\nSi no lo esperaba, no haga nada.' },
    assignment: { subject: '{estate}: ronda en {block} el {date}', text: 'Hola {name}:\n\ntiene una ronda en {block} el {date}: {vines} cepas. Salida: {gate}.\n\nÁbrala antes de salir de casa, para que quede en su teléfono:\n{link}\n\n{notes}\n\nMandan la etiqueta del producto, las señales puestas, la persona responsable y la ley local.' },
    zoningDone: { subject: '{estate}: la zonificación de {block} está lista', text: 'Hola {name}:\n\nla zonificación de {block} está lista:\n{link}' },
    pickNotice: { subject: '{estate}: aviso de vendimia {number}', text: 'Hola {name}:\n\n{body}\n\nConfirme que lo ha leído:\n{link}' },
    restriction: { subject: '{estate}: no entrar en {block}', text: 'Hola {name}:\n\nNo entrar en {block} hasta {until}. Producto: {product}. Plazo según la etiqueta: {interval}. Puesto por {setter}.\n\nMandan la etiqueta del producto, las señales puestas, la persona responsable y la ley local.' },
    reset: { subject: 'Nueva contraseña', text: 'Hola {name}:\n\nabra este enlace antes de una hora para poner una contraseña nueva; sirve una sola vez:\n{link}\n\nSi no lo ha pedido, no haga nada: su contraseña sigue igual.' },
  },
  fr: {
    invitation: { subject: 'Votre invitation à {estate}', text: 'Bonjour {name},\n\n{inviter} vous invite à {estate} en tant que {role}.\n\nOuvrez ce lien dans les {days} jours ; il ne sert qu’une fois :\n{link}\n\nSi vous ne l’attendiez pas, ne faites rien.' },
    assignment: { subject: '{estate} : tournée dans {block} le {date}', text: 'Bonjour {name},\n\nvous avez une tournée dans {block} le {date} : {vines} ceps. Départ : {gate}.\n\nOuvrez-la avant de partir, pour l’avoir sur votre téléphone :\n{link}\n\n{notes}\n\nL’étiquette du produit, les panneaux, la personne responsable et la loi locale priment.' },
    zoningDone: { subject: '{estate} : le zonage de {block} est prêt', text: 'Bonjour {name},\n\nle zonage de {block} est prêt :\n{link}' },
    pickNotice: { subject: '{estate} : avis de vendange {number}', text: 'Bonjour {name},\n\n{body}\n\nConfirmez que vous l’avez lu :\n{link}' },
    restriction: { subject: '{estate} : entrée interdite dans {block}', text: 'Bonjour {name},\n\nEntrée interdite dans {block} jusqu’à {until}. Produit : {product}. Délai saisi d’après l’étiquette : {interval}. Posé par {setter}.\n\nL’étiquette du produit, les panneaux, la personne responsable et la loi locale priment.' },
    reset: { subject: 'Nouveau mot de passe', text: 'Bonjour {name},\n\nouvrez ce lien dans l’heure pour choisir un nouveau mot de passe ; il ne sert qu’une fois :\n{link}\n\nSi vous ne l’avez pas demandé, ne faites rien : votre mot de passe reste le même.' },
  },
  it: {
    invitation: { subject: 'Il suo invito a {estate}', text: 'Buongiorno {name},\n\n{inviter} la invita a {estate} come {role}.\n\nApra questo collegamento entro {days} giorni; vale una volta sola:\n{link}\n\nSe non lo aspettava, non faccia nulla.' },
    assignment: { subject: '{estate}: giro in {block} il {date}', text: 'Buongiorno {name},\n\nha un giro in {block} il {date}: {vines} ceppi. Partenza: {gate}.\n\nLo apra prima di uscire, così resta sul telefono:\n{link}\n\n{notes}\n\nValgono prima l’etichetta del prodotto, i cartelli, la persona responsabile e la legge locale.' },
    zoningDone: { subject: '{estate}: la zonazione di {block} è pronta', text: 'Buongiorno {name},\n\nla zonazione di {block} è pronta:\n{link}' },
    pickNotice: { subject: '{estate}: avviso di vendemmia {number}', text: 'Buongiorno {name},\n\n{body}\n\nConfermi di averlo letto:\n{link}' },
    restriction: { subject: '{estate}: vietato entrare in {block}', text: 'Buongiorno {name},\n\nVietato entrare in {block} fino a {until}. Prodotto: {product}. Intervallo come da etichetta: {interval}. Inserito da {setter}.\n\nValgono prima l’etichetta del prodotto, i cartelli, la persona responsabile e la legge locale.' },
    reset: { subject: 'Nuova password', text: 'Buongiorno {name},\n\napra questo collegamento entro un’ora per scegliere una nuova password; vale una volta sola:\n{link}\n\nSe non l’ha chiesto, non faccia nulla: la password resta com’è.' },
  },
  pt: {
    invitation: { subject: 'O seu convite para {estate}', text: 'Olá {name},\n\n{inviter} convida-o para {estate} como {role}.\n\nAbra esta ligação dentro de {days} dias; serve uma só vez:\n{link}\n\nSe não a esperava, não faça nada.' },
    assignment: { subject: '{estate}: ronda em {block} a {date}', text: 'Olá {name},\n\ntem uma ronda em {block} a {date}: {vines} cepas. Partida: {gate}.\n\nAbra-a antes de sair de casa, para ficar no telemóvel:\n{link}\n\n{notes}\n\nO rótulo do produto, os sinais, a pessoa responsável e a lei local vêm primeiro.' },
    zoningDone: { subject: '{estate}: o zonamento de {block} está pronto', text: 'Olá {name},\n\no zonamento de {block} está pronto:\n{link}' },
    pickNotice: { subject: '{estate}: aviso de vindima {number}', text: 'Olá {name},\n\n{body}\n\nConfirme que o leu:\n{link}' },
    restriction: { subject: '{estate}: não entrar em {block}', text: 'Olá {name},\n\nNão entrar em {block} até {until}. Produto: {product}. Intervalo conforme o rótulo: {interval}. Registado por {setter}.\n\nO rótulo do produto, os sinais, a pessoa responsável e a lei local vêm primeiro.' },
    reset: { subject: 'Nova palavra-passe', text: 'Olá {name},\n\nabra esta ligação dentro de uma hora para definir uma nova palavra-passe; serve uma só vez:\n{link}\n\nSe não a pediu, não faça nada: a sua palavra-passe fica igual.' },
  },
} as const;
